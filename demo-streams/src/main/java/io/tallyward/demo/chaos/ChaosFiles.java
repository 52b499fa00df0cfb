package io.tallyward.demo.chaos;

import io.tallyward.demo.story.Season;
import java.io.IOException;
import java.net.URI;
import java.nio.file.Files;
import java.nio.file.Path;

/** The files of the monitors: plans, secrets and one configuration per name. */
final class ChaosFiles {

    /** How long the group waits for a member; short, so that many faults fit into a run. */
    static final int SESSION_SECONDS = 6;

    /**
     * A tenth of a second between commits has many of the faults strike in the middle of one. A silent partition must not
     * be taken for an idle one, for the wall clock is months ahead of the stream's event time.
     */
    private static final String CONFIGURATION = """
            name: %s
            kafka:
              bootstrap-servers: %s
              properties:
                session.timeout.ms: "%d000"
                heartbeat.interval.ms: "1500"
                request.timeout.ms: "3000"
                default.api.timeout.ms: "10000"
                max.block.ms: "5000"
                delivery.timeout.ms: "5000"
                transaction.timeout.ms: "5000"
                reconnect.backoff.max.ms: "500"
            input:
              topics: [%s]
              start: earliest
              max-skew: PT5M
              idle-after: PT24H
            plans: plans
            commit-interval: PT0.1S
            workers: 2
            http: {host: 127.0.0.1, port: %d}
            unit-key: {file: unit-key}
            """;

    private static final String WEBHOOK =
            "webhook: {url: \"%s\", secret-file: webhook-secret, allow-http: true, allow-private: true}%n";

    private final Path directory;
    private final String bootstrapServers;
    private final String topic;

    ChaosFiles(Path directory, String bootstrapServers, String topic) {
        this.directory = directory;
        this.bootstrapServers = bootstrapServers;
        this.topic = topic;
    }

    /** Writes what all monitors share. */
    void writeShared(Season season, String secret, String unitKey) throws IOException {
        season.writePlans(directory.resolve("plans"));
        Files.writeString(directory.resolve("webhook-secret"), secret + "\n");
        Files.writeString(directory.resolve("unit-key"), unitKey + "\n");
    }

    /** A configuration for monitors of a name that tell nobody. */
    Path silent(String name, int port) throws IOException {
        return write(name, port, "");
    }

    /** A configuration for monitors of a name that post notices. */
    Path telling(String name, int port, URI webhook) throws IOException {
        return write(name, port, WEBHOOK.formatted(webhook));
    }

    private Path write(String name, int port, String webhook) throws IOException {
        String text = CONFIGURATION.formatted(name, bootstrapServers, SESSION_SECONDS, topic, port) + webhook;
        return Files.writeString(directory.resolve(name + "-" + port + ".yaml"), text);
    }
}
