package io.tallyward.connector.embedded;

import java.io.ByteArrayOutputStream;
import java.io.IOException;
import java.io.PrintStream;
import java.io.UncheckedIOException;
import java.net.BindException;
import java.net.InetAddress;
import java.net.InetSocketAddress;
import java.net.ServerSocket;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import java.util.Properties;
import kafka.server.KafkaConfig;
import kafka.server.KafkaRaftServer;
import org.apache.kafka.common.Uuid;
import org.apache.kafka.common.utils.Time;
import org.apache.kafka.metadata.storage.Formatter;

/**
 * One Kafka node on the loopback address, keeping its data in a directory. A new directory is formatted; an existing one is
 * reopened with everything in it, so that stopping and starting is a restart and not a reset. Topics are never created by
 * being mentioned, and records are kept however old their timestamps are.
 *
 * <p>Starting takes two to three seconds. Several brokers may live in one process as long as their directories differ.
 * Thread-safe; {@link #close()} may be called more than once.
 */
public final class EmbeddedBroker implements AutoCloseable {

    private static final String LOOPBACK = "127.0.0.1";
    private static final String CONTROLLER_LISTENER = "CONTROLLER";
    private static final int NODE_ID = 1;

    /** A port seen free may be taken by another process before the broker binds it; a few fresh draws are enough. */
    private static final int PORT_DRAWS = 5;

    private final KafkaRaftServer server;
    private final String bootstrapServers;
    private boolean closed;

    private EmbeddedBroker(KafkaRaftServer server, String bootstrapServers) {
        this.server = server;
        this.bootstrapServers = bootstrapServers;
    }

    /**
     * Starts a broker on a free port.
     *
     * @param directory where the broker keeps its data; created when absent
     * @throws IllegalStateException if the broker cannot start, with the reason as its cause
     */
    public static EmbeddedBroker start(Path directory) {
        IllegalStateException lastFailure = null;
        for (int draw = 0; draw < PORT_DRAWS; draw++) {
            try {
                List<Integer> ports = freePorts(2);
                return start(directory, ports.get(0), ports.get(1));
            } catch (IllegalStateException failure) {
                if (!causedByTakenPort(failure)) {
                    throw failure;
                }
                lastFailure = failure;
            }
        }
        throw lastFailure;
    }

    /**
     * Starts a broker on a given port, which a restart needs when clients are to find it again.
     *
     * @param directory where the broker keeps its data; created when absent
     * @param port the port on the loopback address, 1 to 65535
     * @throws IllegalStateException if the broker cannot start, for example because the port is taken
     */
    public static EmbeddedBroker start(Path directory, int port) {
        if (port >= 1 && port <= 65_535) {
            requireFree(port);
            return start(directory, port, freePorts(1).get(0));
        }
        throw new IllegalArgumentException("port: " + port + " (expected: 1 to 65535)");
    }

    /** Where clients connect: {@code host:port}. */
    public String bootstrapServers() {
        return bootstrapServers;
    }

    /** Stops the broker in order and waits for it; the directory stays as it is. */
    @Override
    public synchronized void close() {
        if (closed) {
            return;
        }
        closed = true;
        server.shutdown();
        server.awaitShutdown();
    }

    private static EmbeddedBroker start(Path directory, int port, int controllerPort) {
        Path data = directory.toAbsolutePath().normalize();
        try {
            format(data);
            KafkaConfig config = KafkaConfig.fromProps(properties(data, port, controllerPort), false);
            KafkaRaftServer server = new KafkaRaftServer(config, Time.SYSTEM);
            startOrStop(server);
            return new EmbeddedBroker(server, LOOPBACK + ":" + port);
        } catch (Exception failure) {
            throw new IllegalStateException(
                    "embedded broker on " + LOOPBACK + ":" + port + " with data in " + data
                            + " did not start: see the cause, or choose another directory",
                    failure);
        }
    }

    private static void startOrStop(KafkaRaftServer server) {
        try {
            server.startup();
        } catch (RuntimeException failure) {
            try {
                server.shutdown();
            } catch (RuntimeException alsoFailed) {
                failure.addSuppressed(alsoFailed);
            }
            throw failure;
        }
    }

    private static void format(Path data) throws Exception {
        if (Files.exists(data.resolve("meta.properties"))) {
            return;
        }
        Files.createDirectories(data);
        ByteArrayOutputStream report = new ByteArrayOutputStream();
        try (PrintStream quiet = new PrintStream(report, true, StandardCharsets.UTF_8)) {
            new Formatter()
                    .setPrintStream(quiet)
                    .setClusterId(Uuid.randomUuid().toString())
                    .setNodeId(NODE_ID)
                    .setControllerListenerName(CONTROLLER_LISTENER)
                    .setDirectories(List.of(data.toString()))
                    .setMetadataLogDirectory(data.toString())
                    .run();
        }
    }

    private static Properties properties(Path data, int port, int controllerPort) {
        Properties settings = new Properties();
        settings.put("process.roles", "broker,controller");
        settings.put("node.id", Integer.toString(NODE_ID));
        settings.put("controller.quorum.voters", NODE_ID + "@" + LOOPBACK + ":" + controllerPort);
        settings.put("controller.listener.names", CONTROLLER_LISTENER);
        settings.put("listener.security.protocol.map", "PLAINTEXT:PLAINTEXT,CONTROLLER:PLAINTEXT");
        settings.put(
                "listeners",
                "PLAINTEXT://" + LOOPBACK + ":" + port + ",CONTROLLER://" + LOOPBACK + ":" + controllerPort);
        settings.put("advertised.listeners", "PLAINTEXT://" + LOOPBACK + ":" + port);
        settings.put("log.dirs", data.toString());
        keepEverythingAskNothing(settings);
        runAlone(settings);
        return settings;
    }

    /** Old event times must not expire on arrival, and a mistyped topic must be an error rather than a new topic. */
    private static void keepEverythingAskNothing(Properties settings) {
        settings.put("log.retention.ms", "-1");
        settings.put("auto.create.topics.enable", "false");
        settings.put("num.partitions", "1");
    }

    /**
     * One node cannot replicate, one client group need not wait for others, and a stop should be quick. How often the broker
     * looks for abandoned transactions is left at its own ten seconds: a lone node that comes back has been seen to drop the
     * markers that should end a transaction in some partitions, which then hangs for good; the less often it looks right
     * after its start, the rarer that is. It is not excluded.
     */
    private static void runAlone(Properties settings) {
        settings.put("default.replication.factor", "1");
        settings.put("min.insync.replicas", "1");
        settings.put("offsets.topic.replication.factor", "1");
        settings.put("offsets.topic.num.partitions", "1");
        settings.put("transaction.state.log.replication.factor", "1");
        settings.put("transaction.state.log.min.isr", "1");
        settings.put("transaction.state.log.num.partitions", "1");
        settings.put("share.coordinator.state.topic.replication.factor", "1");
        settings.put("share.coordinator.state.topic.min.isr", "1");
        settings.put("share.coordinator.state.topic.num.partitions", "1");
        settings.put("transaction.max.timeout.ms", "60000");
        settings.put("group.initial.rebalance.delay.ms", "0");
        settings.put("group.min.session.timeout.ms", "1000");
        settings.put("log.cleaner.dedupe.buffer.size", Integer.toString(4 * 1024 * 1024));
        settings.put("controlled.shutdown.enable", "false");
    }

    /** The server would find out too, but only after starting half of itself and logging at length. */
    private static void requireFree(int port) {
        try (ServerSocket probe = new ServerSocket()) {
            probe.bind(new InetSocketAddress(InetAddress.getByName(LOOPBACK), port));
        } catch (IOException taken) {
            throw new IllegalStateException(
                    "embedded broker: port " + port + " on " + LOOPBACK
                            + " is taken: stop what listens there or choose another port",
                    taken);
        }
    }

    private static List<Integer> freePorts(int count) {
        List<ServerSocket> held = new ArrayList<>();
        try {
            List<Integer> ports = new ArrayList<>();
            for (int i = 0; i < count; i++) {
                ServerSocket socket = new ServerSocket();
                held.add(socket);
                socket.bind(new InetSocketAddress(InetAddress.getByName(LOOPBACK), 0));
                ports.add(socket.getLocalPort());
            }
            return ports;
        } catch (IOException failure) {
            throw new UncheckedIOException("no free port on " + LOOPBACK, failure);
        } finally {
            held.forEach(EmbeddedBroker::release);
        }
    }

    private static void release(ServerSocket socket) {
        try {
            socket.close();
        } catch (IOException failure) {
            throw new UncheckedIOException("port " + socket.getLocalPort() + " could not be released", failure);
        }
    }

    private static boolean causedByTakenPort(Throwable failure) {
        for (Throwable cause = failure; cause != null; cause = cause.getCause()) {
            if (cause instanceof BindException) {
                return true;
            }
        }
        return false;
    }
}
