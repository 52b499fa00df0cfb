package io.tallyward.demo.chaos;

import com.fasterxml.jackson.databind.JsonNode;
import io.tallyward.demo.chaos.Assault.Deadline;
import io.tallyward.demo.chaos.Assault.Orders;
import io.tallyward.demo.chaos.Assault.TimeUp;
import io.tallyward.demo.check.ExperimentCheck;
import io.tallyward.demo.check.Finding;
import io.tallyward.demo.check.MonitorApi.Standing;
import io.tallyward.demo.check.MonitorCounts;
import io.tallyward.demo.check.RecordLog;
import io.tallyward.demo.check.Report;
import io.tallyward.demo.child.LoopbackPorts;
import io.tallyward.demo.receiver.ReceivedNotice;
import io.tallyward.demo.receiver.SignatureCheck;
import io.tallyward.demo.receiver.WebhookReceiver;
import io.tallyward.demo.story.Season;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.stream.InputTopic;
import io.tallyward.demo.stream.Pace;
import io.tallyward.demo.stream.StreamSender;
import io.tallyward.demo.truth.Truth;
import io.tallyward.demo.truth.TruthKeeper;
import java.io.IOException;
import java.nio.file.Path;
import java.security.SecureRandom;
import java.time.Clock;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Base64;
import java.util.HashSet;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.concurrent.CompletableFuture;
import java.util.concurrent.CompletionException;
import java.util.concurrent.TimeUnit;
import java.util.function.Consumer;
import java.util.stream.IntStream;
import java.util.stream.Stream;
import org.apache.kafka.common.TopicPartition;

/** One run: broker, monitors and stream, faults, and in the end the comparison. */
public final class ChaosRun implements AutoCloseable {

    private static final int PARTITIONS = 4;
    private static final int DECIDE_PARTITIONS = 4;
    private static final int FIRST_INSTANCES = 2;
    private static final int KEY_BYTES = 32;
    private static final long POLL_MILLIS = 300;
    private static final Duration HURRIED_STOP = Duration.ofSeconds(2);
    private static final Duration NOTICE_PATIENCE = Duration.ofSeconds(60);
    private static final String TOPIC = "northwater-events";
    private static final String STORMY = "stormy";
    private static final String CALM = "calm";

    private final Options options;
    private final Season season;
    private final Path directory;
    private final Consumer<String> say;
    private final Deadline deadline;
    private final Gate gate = new Gate();
    private final TruthKeeper keeper;
    private final BrokerProcess broker;
    private final ChaosFiles files;
    private final Fleet stormy;
    private final Fleet calm;
    private final WebhookReceiver receiver;
    private volatile StreamSender sender;

    /**
     * How to run.
     *
     * @param faults how many
     * @param events about how many
     * @param seed of stream and faults
     * @param brokerSpared whether only instances of the monitor are struck
     * @param atMost after which time the run gives up
     * @param port of the first instance's page; 0 for any
     */
    public record Options(int faults, long events, long seed, boolean brokerSpared, Duration atMost, int port) {}

    /**
     * Prepares the files; nothing runs yet but the receiver of notices.
     *
     * @param directory an empty one
     * @param say told what happens, line by line
     */
    public ChaosRun(Options options, Path directory, Consumer<String> say) throws IOException {
        this.options = options;
        this.directory = directory;
        this.say = say;
        season = Season.ofAbout(options.events(), options.seed());
        keeper = new TruthKeeper(season.stories(), PARTITIONS);
        deadline = new Deadline(options.atMost());
        broker = new BrokerProcess(directory, LoopbackPorts.free(1).get(0));
        files = new ChaosFiles(directory, broker.bootstrapServers(), TOPIC);
        String secret = SignatureCheck.newSecret();
        files.writeShared(season, secret, newKey());
        receiver = WebhookReceiver.start(new SignatureCheck(secret), Clock.systemUTC(), notice -> {});
        stormy = new Fleet(STORMY, directory, files.telling(STORMY, 0, receiver.address()));
        calm = new Fleet(CALM, directory, files.silent(CALM, 0));
    }

    private static String newKey() {
        byte[] key = new byte[KEY_BYTES];
        new SecureRandom().nextBytes(key);
        return Base64.getEncoder().encodeToString(key);
    }

    /** Carries the run out. A run that takes too long ends with a finding that does not hold. */
    public ChaosReport carryOut() throws IOException, InterruptedException {
        List<Finding> findings = new ArrayList<>();
        broker.start();
        InputTopic.create(broker.bootstrapServers(), TOPIC, PARTITIONS);
        stormy.add(files.telling(STORMY, options.port(), receiver.address()));
        for (int i = 1; i < FIRST_INSTANCES; i++) {
            stormy.add();
        }
        Orders orders = new Orders(options.faults(), options.events(), options.seed(), options.brokerSpared());
        try (Recoveries recoveries = new Recoveries(broker.bootstrapServers(), groups(STORMY));
                StreamSender open = StreamSender.to(broker.bootstrapServers(), TOPIC)) {
            sender = open;
            Assault assault = new Assault(stormy, broker, recoveries, gate, deadline, orders);
            try {
                endure(assault, recoveries, findings);
            } catch (TimeUp up) {
                findings.addAll(stormy.findings());
                findings.add(Finding.of("done in time", false, up.getMessage() + stormy.tail()));
            }
            return new ChaosReport(options.seed(), gate.passed(), deadline.elapsed(), assault.strikes(), findings);
        }
    }

    private void endure(Assault assault, Recoveries recoveries, List<Finding> findings)
            throws IOException, InterruptedException {
        CompletableFuture<Void> sending = CompletableFuture.runAsync(this::send, task -> {
            Thread thread = new Thread(task, "northwater-page");
            thread.setDaemon(true);
            thread.start();
        });
        while (stormy.partitions(PARTITIONS).isEmpty()) {
            pause(stormy);
        }
        assault.carryOut(options.faults(), () -> say.accept(line(assault)), () -> requireSending(sending));
        say.accept("the last fault has struck; the rest of the stream follows");
        while (!sending.isDone()) {
            requireSending(sending);
            pause(stormy);
            recoveries.look();
        }
        requireSending(sending);
        assault.awaitCalm();
        Truth truth = keeper.truth();
        awaitAll(stormy, recoveries, truth);
        say.accept(String.format("%,d events are counted; comparing with the truth", gate.passed()));
        findings.addAll(compareWithTruth(truth));
        findings.addAll(stormy.findings());
        findings.addAll(compareNotices());
        stormy.close();
        say.accept("an undisturbed monitor reads the same topic");
        runCalm(truth);
        findings.addAll(compareWithCalm());
    }

    private String line(Assault assault) {
        int number = assault.strikes().size();
        var strike = assault.strikes().get(number - 1);
        return String.format(
                "  %3d  %-11s %-10s after %,d events", number, strike.fault().code(), strike.victim(), strike.events());
    }

    private void send() {
        Pace asFastAsPossible = new Pace(Duration.ZERO, System::nanoTime);
        sender.send(() -> season.walk(keeper), asFastAsPossible, (event, count) -> gate.pass(count));
    }

    private static void requireSending(CompletableFuture<Void> sending) {
        if (sending.isCompletedExceptionally()) {
            try {
                sending.join();
            } catch (CompletionException failure) {
                throw new IllegalStateException("the stream could not be sent", failure.getCause());
            }
        }
    }

    private void pause(Fleet fleet) throws IOException, InterruptedException {
        deadline.check();
        fleet.replaceFallen();
        broker.requireAlive();
        TimeUnit.MILLISECONDS.sleep(POLL_MILLIS);
    }

    private static Map<String, List<TopicPartition>> groups(String name) {
        return Map.of(
                name + "-count",
                partitions(TOPIC, PARTITIONS),
                name + "-decide",
                partitions(name + "-tallies", DECIDE_PARTITIONS));
    }

    private static List<TopicPartition> partitions(String topic, int count) {
        return IntStream.range(0, count)
                .mapToObj(number -> new TopicPartition(topic, number))
                .toList();
    }

    /** Waits until a monitor has read all there is, says so, and every partition has one owner. */
    private void awaitAll(Fleet fleet, Recoveries progress, Truth truth) throws IOException, InterruptedException {
        while (!progress.allDone() || fleet.partitions(PARTITIONS).isEmpty() || !complete(fleet, truth)) {
            pause(fleet);
        }
    }

    private boolean complete(Fleet fleet, Truth truth) {
        Map<String, Standing> standings = fleet.standings();
        return season.stories().stream().allMatch(story -> {
            Standing standing = standings.get(story.experiment());
            return standing != null && !standing.completeUntil().isBefore(end(truth, story));
        });
    }

    private static Instant end(Truth truth, Story story) {
        return Instant.ofEpochMilli(Math.min(story.runEnd().toEpochMilli(), truth.completeUntilMillis()));
    }

    private List<Finding> compareWithTruth(Truth truth) {
        MonitorCounts counts = MonitorCounts.read(broker.bootstrapServers(), STORMY);
        Map<Integer, JsonNode> partitions = stormy.partitions(PARTITIONS).orElseThrow();
        Map<String, Standing> standings = stormy.standings();
        List<Finding> findings = new ArrayList<>();
        for (Story story : season.stories()) {
            String name = story.experiment();
            long outside = partitions.values().stream()
                    .mapToLong(partition ->
                            outcomes(partition, name).path("outside").asLong())
                    .sum();
            findings.addAll(
                    new ExperimentCheck(truth.experiments().get(name), standings.get(name), counts, outside, List.of())
                            .countFindings());
        }
        findings.add(Report.rejects(truth, counts));
        long sum = partitions.values().stream().mapToLong(this::events).sum();
        findings.add(Finding.of(
                "outcomes, open events and rejects add up to the events sent",
                sum == gate.passed(),
                gate.passed() + " events were sent, the monitor tells of " + sum));
        return findings;
    }

    private static JsonNode outcomes(JsonNode partition, String experiment) {
        return partition.path("experiments").path(experiment).path("outcomes");
    }

    private long events(JsonNode partition) {
        long events = sum(partition.path("rejected"));
        for (Story story : season.stories()) {
            events += sum(outcomes(partition, story.experiment()));
            events += partition
                    .path("experiments")
                    .path(story.experiment())
                    .path("open")
                    .asLong();
        }
        return events;
    }

    private static long sum(JsonNode counts) {
        long sum = 0;
        for (JsonNode count : counts) {
            sum += count.asLong();
        }
        return sum;
    }

    private List<Finding> compareNotices() throws InterruptedException {
        RecordLog outbox = RecordLog.read(broker.bootstrapServers(), STORMY + "-notices");
        Set<String> missing = outbox.texts("id");
        long end = System.nanoTime() + NOTICE_PATIENCE.toNanos();
        while (!missing.isEmpty() && System.nanoTime() < end) {
            missing.removeAll(delivered());
            TimeUnit.MILLISECONDS.sleep(POLL_MILLIS);
        }
        Set<String> invented = new HashSet<>(delivered());
        invented.removeAll(outbox.texts("id"));
        List<String> differences = Stream.concat(
                        missing.stream().map(id -> id + " was not delivered"),
                        invented.stream().map(id -> id + " was delivered and is not in the outbox"))
                .toList();
        return List.of(
                outbox.once("id"),
                new Finding("webhooks: every notice delivered", differences),
                Report.signatures(receiver.refusals()));
    }

    private Set<String> delivered() {
        Set<String> ids = new HashSet<>();
        receiver.notices().stream().map(ReceivedNotice::id).forEach(ids::add);
        return ids;
    }

    private void runCalm(Truth truth) throws IOException, InterruptedException {
        calm.add();
        try (Recoveries progress = new Recoveries(broker.bootstrapServers(), groups(CALM))) {
            awaitAll(calm, progress, truth);
        }
    }

    private List<Finding> compareWithCalm() {
        List<Finding> findings = new ArrayList<>();
        String servers = broker.bootstrapServers();
        RecordLog decisions = RecordLog.read(servers, STORMY + "-decisions");
        RecordLog notices = RecordLog.read(servers, STORMY + "-notices");
        say.accept(decisions.size() + " decision records and " + notices.size() + " notices to compare");
        findings.add(decisions.chained());
        findings.add(decisions.sameAs(RecordLog.read(servers, CALM + "-decisions")));
        findings.add(notices.sameAs(RecordLog.read(servers, CALM + "-notices")));
        findings.add(Finding.of(
                "there were decisions and notices",
                decisions.size() > 0 && notices.size() > 0,
                decisions.size() + " decision records, " + notices.size() + " notices"));
        findings.addAll(calm.findings());
        return findings;
    }

    /** Stops everything, the latest first. May be called again. */
    @Override
    public void close() {
        gate.openTo(Long.MAX_VALUE);
        calm.close();
        stormy.close();
        receiver.close();
        broker.close();
    }

    /** Stops everything without patience. */
    public void closeInHurry() {
        calm.stopWithin(HURRIED_STOP);
        stormy.stopWithin(HURRIED_STOP);
        receiver.close();
        broker.closeInHurry();
    }
}
