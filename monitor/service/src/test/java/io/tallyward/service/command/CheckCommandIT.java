package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTimeout;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.connector.kafka.InternalTopics;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class CheckCommandIT {

    /** The command gives up after five seconds; the rest is allowance for a busy machine. */
    private static final Duration BOUND = Duration.ofSeconds(30);

    @TempDir
    Path directory;

    @Test
    void saysThatTheBrokerIsMissing() throws IOException {
        // Port 1 of the loopback interface: nothing listens there.
        Path config = Files.writeString(directory.resolve("tallyward.yaml"), """
                kafka: {bootstrap-servers: "127.0.0.1:1"}
                input: {topics: [northwater-events]}
                """);
        Files.createDirectory(directory.resolve("plans"));
        Files.writeString(directory.resolve("plans/quay.yaml"), CheckCommandTest.PLAN);

        CommandRun run = assertTimeout(
                BOUND,
                () -> CommandRun.of(
                        (started, plans) -> {
                            throw new AssertionError("the service was started");
                        },
                        InternalTopics::partitions,
                        () -> {},
                        "check",
                        "--config",
                        config.toString()));

        assertEquals(3, run.status());
        assertEquals(
                List.of(
                        "configuration  fine: " + config,
                        "plans          fine: quay-banner",
                        "broker         not as it has to be"),
                run.out());
        assertEquals(1, run.err().size(), () -> run.err().toString());
        assertTrue(
                run.err()
                        .get(0)
                        .matches("the broker at 127\\.0\\.0\\.1:1 does not answer: start it, or correct "
                                + "the bootstrap servers"),
                run.err().get(0));
    }
}
