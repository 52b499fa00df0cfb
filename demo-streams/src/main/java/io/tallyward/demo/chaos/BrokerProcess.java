package io.tallyward.demo.chaos;

import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.LoopbackPorts;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;

/** A broker that can be taken away and comes back at the same address with the same disk. Thread-safe. */
final class BrokerProcess implements AutoCloseable {

    private static final Duration START_PATIENCE = Duration.ofSeconds(60);
    private static final Duration STOP_PATIENCE = Duration.ofSeconds(20);
    private static final String MAIN = "io.tallyward.connector.embedded.EmbeddedBrokerMain";
    private static final String LOGGING = "-Dlogback.configurationFile=io/tallyward/demo/broker-logging.xml";

    private final Path directory;
    private final int port;
    private ChildProcess process;
    private int starts;
    private boolean closed;

    BrokerProcess(Path directory, int port) {
        this.directory = directory;
        this.port = port;
    }

    String bootstrapServers() {
        return LoopbackPorts.HOST + ":" + port;
    }

    /** Starts it and waits until it serves. */
    void start() throws IOException, InterruptedException {
        launch().awaitOutput("broker ready at", START_PATIENCE);
    }

    private synchronized ChildProcess launch() throws IOException {
        if (closed) {
            throw new IllegalStateException("broker: not started, for the run is being stopped");
        }
        starts++;
        process = ChildProcess.start(
                "broker",
                directory.resolve("broker-" + starts + ".log"),
                List.of("-Xmx512m", "-XX:+UseSerialGC", "-XX:TieredStopAtLevel=1", LOGGING),
                List.of(MAIN, directory.resolve("broker").toString(), Integer.toString(port)));
        return process;
    }

    synchronized void requireAlive() {
        process.requireAlive();
    }

    /** Stops it in good order. */
    synchronized void stop() {
        process.stopWithin(STOP_PATIENCE);
    }

    /** Kills it without warning. */
    synchronized void kill() throws InterruptedException {
        process.kill();
    }

    @Override
    public synchronized void close() {
        closed = true;
        if (process != null) {
            process.stopWithin(STOP_PATIENCE);
        }
    }

    /** Stops it by force if it takes longer than two seconds. */
    synchronized void closeInHurry() {
        closed = true;
        if (process != null) {
            process.stopWithin(Duration.ofSeconds(2));
        }
    }
}
