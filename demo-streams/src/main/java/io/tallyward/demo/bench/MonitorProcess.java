package io.tallyward.demo.bench;

import io.tallyward.demo.check.MonitorApi;
import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.LoopbackPorts;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.concurrent.TimeUnit;

/** A monitor as its users run it, in a process of its own. Not thread-safe. */
final class MonitorProcess implements AutoCloseable {

    private static final String MAIN = "io.tallyward.service.Tallyward";
    private static final long LOOK_MILLIS = 5;

    /** How often a starting monitor is asked whether it is ready: more often, and answering is much of what it does. */
    private static final long START_LOOK_MILLIS = 50;

    /** The events are months old: without a long idle time the clock would stand in for event time. */
    private static final String CONFIGURATION = """
            name: %s
            kafka: {bootstrap-servers: "%s"%s}
            input: {topics: [%s], start: earliest, idle-after: PT24H}
            plans: %s
            commit-interval: %s
            http: {host: %s, port: %d}
            """;

    private final ChildProcess process;
    private final MonitorApi api;

    private MonitorProcess(ChildProcess process, MonitorApi api) {
        this.process = process;
        this.api = api;
    }

    /**
     * What a monitor is told.
     *
     * @param name its name, which instances that share the work have in common
     * @param topic what it reads
     * @param plans directory of the plans
     * @param commitInterval how often it commits
     * @param kafka further keys of the section {@code kafka}; each begins with a comma
     * @param virtualMachine further options of its virtual machine
     */
    record Setting(
            String name,
            String topic,
            Path plans,
            Duration commitInterval,
            String kafka,
            List<String> virtualMachine) {}

    /** Starts an instance and does not wait for it. */
    static MonitorProcess start(Stage stage, String instance, Setting setting) throws IOException {
        int port = LoopbackPorts.free(1).get(0);
        Path file = stage.directory().resolve(instance + ".yaml");
        Files.writeString(
                file,
                CONFIGURATION.formatted(
                        setting.name(),
                        stage.bootstrapServers(),
                        setting.kafka(),
                        setting.topic(),
                        setting.plans(),
                        setting.commitInterval(),
                        LoopbackPorts.HOST,
                        port));
        List<String> virtualMachine = new ArrayList<>(List.of("-Xmx1g", "-XX:+UseParallelGC"));
        virtualMachine.addAll(setting.virtualMachine());
        ChildProcess process =
                stage.startTied(instance, virtualMachine, List.of(MAIN, "watch", "--config", file.toString()));
        return new MonitorProcess(process, new MonitorApi(port));
    }

    MonitorApi api() {
        return api;
    }

    /** CPU time so far, user and system of all threads, in seconds. */
    double cpuSeconds() {
        return process.cpuSeconds();
    }

    /**
     * Waits until the monitor says that it is ready.
     *
     * @return the moment, as {@link System#nanoTime}
     * @throws IllegalStateException when it ends first or the patience does
     */
    long awaitReady(Duration patience) throws InterruptedException {
        long deadline = System.nanoTime() + patience.toNanos();
        while (!api.isReady()) {
            requireBefore(deadline, "ready", START_LOOK_MILLIS);
        }
        return System.nanoTime();
    }

    /** Waits a moment for something that has not happened yet, unless the monitor has ended or the time is over. */
    void requireBefore(long deadlineNanos, String wanted) throws InterruptedException {
        requireBefore(deadlineNanos, wanted, LOOK_MILLIS);
    }

    private void requireBefore(long deadlineNanos, String wanted, long lookMillis) throws InterruptedException {
        process.requireAlive();
        if (System.nanoTime() - deadlineNanos > 0) {
            throw new IllegalStateException("the monitor is not " + wanted + " in time" + process.tail());
        }
        TimeUnit.MILLISECONDS.sleep(lookMillis);
    }

    /** Ends it at once, as {@code kill -9} does. */
    void kill() throws InterruptedException {
        process.kill();
    }

    @Override
    public void close() {
        process.close();
    }
}
