package io.tallyward.demo;

import io.tallyward.demo.check.DecisionLog;
import io.tallyward.demo.check.ExperimentCheck;
import io.tallyward.demo.check.Finding;
import io.tallyward.demo.check.MonitorApi;
import io.tallyward.demo.check.MonitorApi.Standing;
import io.tallyward.demo.check.MonitorCounts;
import io.tallyward.demo.check.Report;
import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.LoopbackPorts;
import io.tallyward.demo.child.TiedToParent;
import io.tallyward.demo.receiver.ReceivedNotice;
import io.tallyward.demo.receiver.SignatureCheck;
import io.tallyward.demo.receiver.WebhookReceiver;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.stream.InputTopic;
import io.tallyward.demo.stream.Pace;
import io.tallyward.demo.stream.StreamSender;
import io.tallyward.demo.truth.ExperimentTruth;
import io.tallyward.demo.truth.Truth;
import java.io.IOException;
import java.nio.file.Path;
import java.security.SecureRandom;
import java.time.Clock;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Base64;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.concurrent.TimeUnit;
import java.util.function.BooleanSupplier;

/** One run of the demonstration: broker, monitor, receiver and stream, started in this order and stopped in reverse. */
final class DemoRun implements AutoCloseable {

    /** Partitions of the topic; a replay that is to agree needs as many. */
    static final int PARTITIONS = 4;

    private static final int KEY_BYTES = 32;
    private static final Duration START_PATIENCE = Duration.ofSeconds(90);
    private static final Duration CATCH_UP_PATIENCE = Duration.ofSeconds(180);
    private static final Duration NOTICE_PATIENCE = Duration.ofSeconds(30);

    /** A monitor whose broker has gone cannot stop in good order, and nothing of the demo is worth a longer wait. */
    private static final Duration HURRIED_STOP = Duration.ofSeconds(2);

    private static final long POLL_MILLIS = 300;
    private static final String BROKER_MAIN = "io.tallyward.connector.embedded.EmbeddedBrokerMain";
    private static final String MONITOR_MAIN = "io.tallyward.service.Tallyward";
    private static final String BROKER_LOGGING = "-Dlogback.configurationFile=io/tallyward/demo/broker-logging.xml";

    private final Scenario scenario;
    private final Options options;
    private final Path directory;
    private final Screen screen;
    private final List<AutoCloseable> running = new ArrayList<>();

    private String bootstrapServers;
    private Path configuration;
    private MonitorApi api;
    private WebhookReceiver receiver;
    private ChildProcess monitor;
    private boolean closed;
    private volatile boolean hurried;

    /**
     * How to run.
     *
     * @param fourteenDays how long the fourteen days take
     * @param port of the monitor's page; 0 for any
     * @param kills how often to kill the monitor in mid-stream
     * @param replay whether to compare the decision records with those of a replay
     */
    record Options(Duration fourteenDays, int port, int kills, boolean replay) {}

    /** Nothing is started yet. */
    DemoRun(Scenario scenario, Options options, Path directory, Screen screen) {
        this.scenario = scenario;
        this.options = options;
        this.directory = directory;
        this.screen = screen;
    }

    /** Starts everything but the stream. */
    void start() throws IOException, InterruptedException {
        List<Integer> ports = LoopbackPorts.free(2);
        bootstrapServers = LoopbackPorts.HOST + ":" + ports.get(0);
        int httpPort = options.port() == 0 ? ports.get(1) : options.port();
        screen.line("starting a broker at " + bootstrapServers);
        ChildProcess broker = ChildProcess.start(
                "broker",
                directory.resolve("broker.log"),
                List.of("-Xmx384m", "-XX:+UseSerialGC", "-XX:TieredStopAtLevel=1", BROKER_LOGGING),
                List.of(BROKER_MAIN, directory.resolve("broker").toString(), Integer.toString(ports.get(0))));
        started(broker);
        broker.awaitOutput("broker ready at", START_PATIENCE);
        InputTopic.create(bootstrapServers, MonitorFiles.TOPIC, PARTITIONS);

        String secret = SignatureCheck.newSecret();
        receiver = WebhookReceiver.start(
                new SignatureCheck(secret), Clock.systemUTC(), notice -> screen.line(notice.line()));
        started(receiver);
        configuration = MonitorFiles.write(
                directory,
                scenario,
                new MonitorFiles.Surroundings(bootstrapServers, httpPort, receiver.address(), secret, newKey()));
        api = new MonitorApi(httpPort);
        screen.line("starting the monitor; its page will be at " + api.page());
        startMonitor();
        await("the monitor", START_PATIENCE, () -> api.isUp());
    }

    private static String newKey() {
        byte[] key = new byte[KEY_BYTES];
        new SecureRandom().nextBytes(key);
        return Base64.getEncoder().encodeToString(key);
    }

    private synchronized void startMonitor() throws IOException {
        if (closed) {
            throw new IllegalStateException("monitor: not started, for the demo is being stopped");
        }
        monitor = ChildProcess.start(
                "monitor",
                directory.resolve("monitor.log"),
                List.of("-Xmx384m", "-XX:+UseSerialGC"),
                List.of(TiedToParent.class.getName(), MONITOR_MAIN, "watch", "--config", configuration.toString()));
        started(monitor);
    }

    private synchronized void killMonitor() throws InterruptedException {
        monitor.kill();
        running.remove(monitor);
    }

    private synchronized void started(AutoCloseable part) {
        running.add(part);
        if (closed) {
            stopAll();
        }
    }

    /** Sends the stream, waits until the monitor has counted all of it, and compares. */
    Report stream() throws IOException, InterruptedException {
        Truth truth = Truth.of(scenario, PARTITIONS);
        StreamProgress progress = new StreamProgress(scenario.events().size(), screen, System::nanoTime);
        KillSchedule schedule = new KillSchedule(scenario.events().size(), options.kills());
        try (StreamSender sender = StreamSender.to(bootstrapServers, MonitorFiles.TOPIC)) {
            sender.send(scenario.events(), new Pace(options.fourteenDays(), System::nanoTime), (event, count) -> {
                progress.sent(event, count);
                if (schedule.due(count)) {
                    killAndRestart(count);
                }
            });
        }
        screen.line("the stream has been sent; waiting for the monitor");
        await("the monitor", CATCH_UP_PATIENCE, () -> caughtUp(truth));
        awaitNotices();
        return report(truth);
    }

    private void killAndRestart(long count) {
        try {
            killMonitor();
            startMonitor();
            screen.line("  killed the monitor after " + count + " events and started it again");
        } catch (IOException e) {
            throw new IllegalStateException("monitor: cannot be started again", e);
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
            throw new IllegalStateException("monitor: interrupted while it was killed", e);
        }
    }

    private boolean caughtUp(Truth truth) {
        Map<String, Standing> standings = api.standings();
        return truth.experiments().values().stream().allMatch(experiment -> {
            Standing standing = standings.get(experiment.story().experiment());
            return standing != null && !standing.completeUntil().isBefore(end(truth, experiment.story()));
        });
    }

    /** Up to where every window of an experiment must be complete in the end. */
    private static Instant end(Truth truth, Story story) {
        return Instant.ofEpochMilli(Math.min(story.runEnd().toEpochMilli(), truth.completeUntilMillis()));
    }

    /** Notices may be under way for a moment longer; if one stays away, the comparison will say so. */
    private void awaitNotices() throws InterruptedException {
        long deadline = System.nanoTime() + NOTICE_PATIENCE.toNanos();
        while (System.nanoTime() < deadline && !scenario.stories().stream().allMatch(this::noticed)) {
            TimeUnit.MILLISECONDS.sleep(POLL_MILLIS);
        }
    }

    private boolean noticed(Story story) {
        return story.expectation()
                .notice()
                .map(right -> notices(story).stream().anyMatch(notice -> notice.fits(right)))
                .orElse(true);
    }

    private List<ReceivedNotice> notices(Story story) {
        return receiver.notices().stream()
                .filter(notice -> notice.experiment().equals(story.experiment()))
                .toList();
    }

    private Report report(Truth truth) throws IOException, InterruptedException {
        MonitorCounts counts = MonitorCounts.read(bootstrapServers, MonitorFiles.NAME);
        Map<String, Standing> standings = api.standings();
        List<ExperimentCheck> checks = new ArrayList<>();
        for (Story story : scenario.stories()) {
            ExperimentTruth right = truth.experiments().get(story.experiment());
            Standing standing = standings.get(story.experiment());
            if (standing == null) {
                throw new IllegalStateException("monitor: its API no longer answers" + monitor.tail());
            }
            long outside = api.outside(story.experiment());
            checks.add(new ExperimentCheck(right, standing, counts, outside, notices(story)));
        }
        List<Finding> others = new ArrayList<>();
        others.add(Report.rejects(truth, counts));
        others.add(Report.signatures(receiver.refusals()));
        others.add(VerifyRun.of(configuration, directory.resolve("verify.log")));
        if (options.replay()) {
            others.add(compareWithReplay(standings));
        }
        return new Report(checks, others);
    }

    private Finding compareWithReplay(Map<String, Standing> standings) throws IOException, InterruptedException {
        screen.line("replaying the stream from a file");
        DecisionLog live = DecisionLog.ofMonitor(bootstrapServers, MonitorFiles.NAME);
        DecisionLog replayed = ReplayRun.of(scenario, directory);
        screen.line(live.size() + " decision records of the monitor, " + replayed.size() + " of the replay");
        Map<String, Instant> completeUntil = new HashMap<>();
        standings.forEach((experiment, standing) -> completeUntil.put(experiment, standing.completeUntil()));
        return live.sameAs(replayed, completeUntil);
    }

    /** Says where to look while everything stays up. */
    void showAddresses() {
        screen.line("");
        screen.line("page     " + api.page());
        screen.line("metrics  " + api.metrics());
        screen.line("broker   " + bootstrapServers);
        screen.line("files    " + directory);
        screen.line("Ctrl-C ends everything.");
    }

    private void await(String whom, Duration patience, BooleanSupplier done) throws InterruptedException {
        long deadline = System.nanoTime() + patience.toNanos();
        while (!done.getAsBoolean()) {
            monitor.requireAlive();
            if (System.nanoTime() > deadline) {
                throw new IllegalStateException(
                        whom + ": not done after " + patience.toSeconds() + " s" + monitor.tail());
            }
            TimeUnit.MILLISECONDS.sleep(POLL_MILLIS);
        }
    }

    /** Stops what runs, with two seconds for each part before it is killed. */
    void stopInHurry() {
        hurried = true;
        close();
    }

    /** Stops what runs, the latest first. May be called again. */
    @Override
    public synchronized void close() {
        closed = true;
        stopAll();
    }

    private void stopAll() {
        for (int i = running.size() - 1; i >= 0; i--) {
            try {
                stop(running.get(i));
            } catch (Exception failure) {
                screen.alert("could not be stopped: " + failure.getMessage());
            }
        }
        running.clear();
    }

    private void stop(AutoCloseable part) throws Exception {
        if (hurried && part instanceof ChildProcess child) {
            child.stopWithin(HURRIED_STOP);
        } else {
            part.close();
        }
    }
}
