package io.tallyward.demo.bench;

import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.LoopbackPorts;
import io.tallyward.demo.child.TiedToParent;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.stream.Stream;

/**
 * What a measurement plays on: a directory, a broker in a process of its own and the processes it has started. Closing
 * stops whatever still runs. Thread-safe.
 */
final class Stage implements AutoCloseable {

    /** How long a process may take to start on a machine that has other work. */
    static final Duration START_PATIENCE = Duration.ofSeconds(90);

    /** What keeps the Kafka clients of a process from filling its log. */
    static final String LOGGING = "-Dlogback.configurationFile=io/tallyward/demo/broker-logging.xml";

    private static final String BROKER_MAIN = "io.tallyward.connector.embedded.EmbeddedBrokerMain";

    private final Path directory;
    private final String bootstrapServers;
    private final List<ChildProcess> processes = new ArrayList<>();
    private ChildProcess broker;
    private boolean closed;

    /** A stage whose broker is not started yet. */
    Stage(Path directory) throws IOException {
        this.directory = directory;
        bootstrapServers = LoopbackPorts.HOST + ":" + LoopbackPorts.free(1).get(0);
    }

    Path directory() {
        return directory;
    }

    String bootstrapServers() {
        return bootstrapServers;
    }

    /** Starts the broker and waits until it serves. */
    void startBroker() throws IOException, InterruptedException {
        String port = bootstrapServers.substring(bootstrapServers.indexOf(':') + 1);
        ChildProcess started = start(
                "broker",
                List.of("-Xmx512m", "-XX:+UseSerialGC", "-XX:TieredStopAtLevel=1", LOGGING),
                List.of(BROKER_MAIN, directory.resolve("broker").toString(), port));
        started.awaitOutput("broker ready at", START_PATIENCE);
        synchronized (this) {
            broker = started;
        }
    }

    /** Starts a process that ends with this one; its output goes to a file named after it. */
    ChildProcess startTied(String name, List<String> virtualMachine, List<String> mainAndArguments) throws IOException {
        return start(
                name,
                virtualMachine,
                Stream.concat(Stream.of(TiedToParent.class.getName()), mainAndArguments.stream())
                        .toList());
    }

    private synchronized ChildProcess start(String name, List<String> virtualMachine, List<String> mainAndArguments)
            throws IOException {
        if (closed) {
            throw new IllegalStateException(name + ": not started, for the measurement is being stopped");
        }
        processes.removeIf(process -> !process.isAlive());
        ChildProcess started =
                ChildProcess.start(name, directory.resolve(name + ".log"), virtualMachine, mainAndArguments);
        processes.add(started);
        return started;
    }

    /** @throws IllegalStateException when the broker has ended; the message shows its last lines */
    synchronized void requireBroker() {
        broker.requireAlive();
    }

    /** Stops everything in good order, the latest first. */
    @Override
    public void close() {
        List<ChildProcess> open = stopStarting();
        for (int i = open.size() - 1; i >= 0; i--) {
            open.get(i).close();
        }
    }

    private synchronized List<ChildProcess> stopStarting() {
        closed = true;
        List<ChildProcess> open = List.copyOf(processes);
        processes.clear();
        return open;
    }
}
