package io.tallyward.demo;

import io.tallyward.demo.story.Scenario;
import java.io.IOException;
import java.net.URI;
import java.nio.file.Files;
import java.nio.file.Path;

/** The files a monitor needs: configuration, plans and the secret of the webhook. */
final class MonitorFiles {

    /** Prefix of the monitor's topics. */
    static final String NAME = "tallyward";

    /** The topic of the page's events. */
    static final String TOPIC = "northwater-events";

    /**
     * The stream's event time lies in the past and a run of the demo is short, so a silent partition must not be taken for
     * an idle one: the wall clock, months ahead, would then stand in for event time.
     */
    private static final String CONFIGURATION = """
            name: %s
            kafka:
              bootstrap-servers: %s
            input:
              topics: [%s]
              start: earliest
              fields: {kind: /kind, experiment: /experiment, variant: /variant, unit: /unit, id: /id, at: /at, source: /source, view: /view, segments: /segments}
              kinds: {view: [view], click: [click]}
              max-skew: PT5M
              idle-after: PT24H
              max-event-bytes: 65536
            plans: plans
            commit-interval: PT1S
            workers: 2
            http: {host: 127.0.0.1, port: %d}
            webhook: {url: "%s", secret-file: webhook-secret, allow-http: true, allow-private: true}
            unit-key: {file: unit-key}
            """;

    private MonitorFiles() {}

    /**
     * Writes everything into a directory.
     *
     * @return the configuration file
     */
    static Path write(Path directory, Scenario scenario, Surroundings surroundings) throws IOException {
        scenario.writePlans(directory.resolve("plans"));
        Files.writeString(directory.resolve("webhook-secret"), surroundings.secret() + "\n");
        Files.writeString(directory.resolve("unit-key"), surroundings.unitKey() + "\n");
        Path configuration = directory.resolve("tallyward.yaml");
        String text = CONFIGURATION.formatted(
                NAME, surroundings.bootstrapServers(), TOPIC, surroundings.httpPort(), surroundings.webhook());
        return Files.writeString(configuration, text);
    }

    /**
     * What the monitor is connected to.
     *
     * @param bootstrapServers the broker
     * @param httpPort where the monitor listens
     * @param webhook where it sends notices
     * @param secret the signing secret of the webhook
     * @param unitKey the key under which the monitor hashes units
     */
    record Surroundings(String bootstrapServers, int httpPort, URI webhook, String secret, String unitKey) {

        @Override
        public String toString() {
            return "Surroundings[" + bootstrapServers + ", " + httpPort + ", " + webhook + "]";
        }
    }
}
