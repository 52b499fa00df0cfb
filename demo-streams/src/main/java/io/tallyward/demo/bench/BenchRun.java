package io.tallyward.demo.bench;

import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.LoopbackPorts;
import io.tallyward.demo.child.TiedToParent;
import io.tallyward.demo.stream.InputTopic;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.function.Consumer;

/** A broker, a topic full of events, and every case in turn, each a process of its own. */
final class BenchRun implements AutoCloseable {

    static final int PARTITIONS = 4;
    static final String TOPIC = "northwater-events";

    /** Events read before measuring begins, so that the compiler has done most of its work. */
    static final long WARM_UP = 500_000;

    private static final Duration START_PATIENCE = Duration.ofSeconds(90);

    /** Slower than this, something is wrong. */
    private static final long LEAST_EVENTS_PER_SECOND = 5_000;

    private static final String BROKER_MAIN = "io.tallyward.connector.embedded.EmbeddedBrokerMain";
    private static final String LOGGING = "-Dlogback.configurationFile=io/tallyward/demo/broker-logging.xml";

    private final Path directory;
    private final Options options;
    private final Consumer<String> progress;
    private final String bootstrapServers;
    private final ChildProcess broker;

    /**
     * What to run.
     *
     * @param events events to measure with
     * @param repeats rounds of all cases
     * @param recordings where to leave a flight recording of each run; null for none
     */
    record Options(long events, int repeats, Path recordings) {}

    /** Starts the broker. */
    BenchRun(Path directory, Options options, Consumer<String> progress) throws IOException, InterruptedException {
        this.directory = directory;
        this.options = options;
        this.progress = progress;
        int port = LoopbackPorts.free(1).get(0);
        bootstrapServers = LoopbackPorts.HOST + ":" + port;
        broker = ChildProcess.start(
                "broker",
                directory.resolve("broker.log"),
                List.of("-Xmx512m", "-XX:+UseSerialGC", "-XX:TieredStopAtLevel=1", LOGGING),
                List.of(BROKER_MAIN, directory.resolve("broker").toString(), Integer.toString(port)));
        try {
            broker.awaitOutput("broker ready at", START_PATIENCE);
        } catch (InterruptedException | RuntimeException failure) {
            broker.close();
            throw failure;
        }
    }

    BenchResults measure() throws IOException, InterruptedException {
        Traffic.SCENARIO.writePlans(directory.resolve("plans"));
        InputTopic.create(bootstrapServers, TOPIC, PARTITIONS);
        long events = options.events() + WARM_UP;
        progress.accept("sending " + events + " events");
        long bytes = TrafficSender.send(bootstrapServers, TOPIC, events);
        progress.accept("values have " + bytes / events + " bytes on average");
        BenchResults results = new BenchResults();
        for (int round = 1; round <= options.repeats(); round++) {
            for (BenchCase each : BenchCase.values()) {
                Measurement measurement = run(each, round, events);
                progress.accept(String.format(
                        Locale.ROOT,
                        "round %d %-11s %6.2f CPU-s per million, %,.0f events/s",
                        round,
                        each.code(),
                        measurement.cpuSecondsPerMillion(),
                        measurement.eventsPerSecond()));
                results.add(each, measurement);
            }
        }
        return results;
    }

    private Measurement run(BenchCase each, int round, long events) throws IOException, InterruptedException {
        broker.requireAlive();
        String name = each.code() + "-" + round;
        Path log = directory.resolve(name + ".log");
        try (ChildProcess child = ChildProcess.start(
                name,
                log,
                virtualMachine(name),
                List.of(
                        TiedToParent.class.getName(),
                        CaseMain.class.getName(),
                        each.code(),
                        directory.toString(),
                        bootstrapServers,
                        Long.toString(events),
                        Long.toString(WARM_UP),
                        name))) {
            child.awaitEnd(START_PATIENCE.plusSeconds(events / LEAST_EVENTS_PER_SECOND));
        }
        return Measurement.in(Files.readString(log));
    }

    private List<String> virtualMachine(String name) {
        List<String> virtualMachine = new ArrayList<>(List.of("-Xmx1g", "-XX:+UseParallelGC", LOGGING));
        if (options.recordings() != null) {
            virtualMachine.add("-XX:StartFlightRecording=settings=profile,filename="
                    + options.recordings().resolve(name + ".jfr"));
        }
        return virtualMachine;
    }

    @Override
    public void close() {
        broker.close();
    }
}
