package io.tallyward.testkit;

import io.tallyward.connector.embedded.EmbeddedBroker;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.Comparator;
import java.util.Optional;
import java.util.stream.Stream;
import org.testcontainers.DockerClientFactory;
import org.testcontainers.kafka.KafkaContainer;
import org.testcontainers.utility.DockerImageName;

/**
 * The one broker of this JVM. A container is preferred, because it is a broker as people run it; whatever keeps it from
 * running is said and leads to the embedded one.
 */
record SharedBroker(String bootstrapServers, String description, Runnable stop) {

    /** The same version as the client library in the parent pom. */
    private static final String IMAGE = "apache/kafka:4.4.0";

    private static final Duration CONTAINER_PATIENCE = Duration.ofMinutes(1);

    private static SharedBroker shared;

    static synchronized SharedBroker get() {
        if (shared == null) {
            shared = startOne();
            Runtime.getRuntime().addShutdownHook(new Thread(shared.stop, "broker-under-test-stop"));
            System.out.println("broker under test: " + shared.description + " at " + shared.bootstrapServers);
        }
        return shared;
    }

    private static SharedBroker startOne() {
        Optional<String> obstacle = dockerObstacle();
        if (obstacle.isPresent()) {
            return embedded(obstacle.get());
        }
        try {
            return container();
        } catch (RuntimeException failure) {
            return embedded("the container did not start: " + innermostMessage(failure));
        }
    }

    private static Optional<String> dockerObstacle() {
        try {
            return DockerClientFactory.instance().isDockerAvailable()
                    ? Optional.empty()
                    : Optional.of("no Docker engine answers");
        } catch (RuntimeException | LinkageError failure) {
            return Optional.of("the Docker engine could not be asked: " + innermostMessage(failure));
        }
    }

    // The container outlives this method on purpose; the returned broker stops it.
    @SuppressWarnings("resource")
    private static SharedBroker container() {
        DockerImageName image = DockerImageName.parse(IMAGE);
        KafkaContainer container = new KafkaContainer(image)
                .withEnv("KAFKA_AUTO_CREATE_TOPICS_ENABLE", "false")
                .withEnv("KAFKA_LOG_RETENTION_MS", "-1")
                .withEnv("KAFKA_GROUP_INITIAL_REBALANCE_DELAY_MS", "0")
                .withEnv("KAFKA_GROUP_MIN_SESSION_TIMEOUT_MS", "1000")
                .withStartupTimeout(CONTAINER_PATIENCE);
        try {
            container.start();
        } catch (RuntimeException failure) {
            container.stop();
            throw failure;
        }
        return new SharedBroker(container.getBootstrapServers(), "container " + image, container::stop);
    }

    private static SharedBroker embedded(String reason) {
        Path directory;
        try {
            directory = Files.createTempDirectory("broker-under-test");
        } catch (IOException failure) {
            throw new UncheckedIOException("no directory for the embedded broker", failure);
        }
        EmbeddedBroker broker = EmbeddedBroker.start(directory);
        return new SharedBroker(broker.bootstrapServers(), "embedded broker (" + reason + ")", () -> {
            broker.close();
            delete(directory);
        });
    }

    private static void delete(Path directory) {
        try (Stream<Path> files = Files.walk(directory)) {
            files.sorted(Comparator.reverseOrder())
                    .map(Path::toFile)
                    .filter(file -> !file.delete())
                    .forEach(file -> System.out.println("broker under test: left behind " + file));
        } catch (IOException | UncheckedIOException failure) {
            System.out.println("broker under test: left behind " + directory);
        }
    }

    private static String innermostMessage(Throwable failure) {
        Throwable cause = failure;
        while (cause.getCause() != null) {
            cause = cause.getCause();
        }
        return cause.getMessage() == null ? cause.toString() : cause.getMessage();
    }
}
