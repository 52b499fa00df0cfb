package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.OptionalInt;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class WatchCommandTest {

    @TempDir
    Path directory;

    private final List<String> steps = new ArrayList<>();
    private Path config;

    @BeforeEach
    void write() throws IOException {
        config = Files.writeString(directory.resolve("tallyward.yaml"), """
                kafka: {bootstrap-servers: "127.0.0.1:9092"}
                input: {topics: [northwater-events]}
                """);
        Files.createDirectory(directory.resolve("plans"));
        Files.writeString(directory.resolve("plans/fare.yaml"), """
                experiment: fare-chip
                question: does a fare chip change clicks?
                owner: web-growth@northwater.example
                variants: {bare: {share: 0.5, control: true}, chip: {share: 0.5}}
                test: {alpha: 0.05, baseline: 0.12, smallest-effect: 0.006}
                looks: {every: P1D}
                run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
                """);
    }

    @Test
    void runsUntilItIsToldToStop() {
        CommandRun run = watch((config, plans) -> {
            steps.add("start " + plans.get(0).experiment() + " from "
                    + config.input().topics());
            return () -> steps.add("close");
        });
        assertEquals(List.of("start fare-chip from [northwater-events]", "stop", "close"), steps);
        assertEquals(new CommandRun(0, List.of("watching fare-chip", "stopped fare-chip"), List.of()), run);
    }

    @Test
    void saysWhyItCannotStart() {
        CommandRun run = watch((config, plans) -> {
            throw new SurroundingsException("Port 8087 is taken: choose another http.port.");
        });
        assertEquals(new CommandRun(3, List.of(), List.of("Port 8087 is taken: choose another http.port.")), run);
    }

    @Test
    void saysWhyItHadToStop() {
        CommandRun run = watch((config, plans) -> () -> {
            throw new SurroundingsException("The service stops because a count went backwards.");
        });
        assertEquals(3, run.status());
        assertEquals(List.of("The service stops because a count went backwards."), run.err());
    }

    @Test
    void showsNoStackTraceOfTheUnforeseen() {
        CommandRun run = watch((config, plans) -> {
            throw new IllegalStateException("no quay");
        });
        assertEquals(
                new CommandRun(
                        3,
                        List.of(),
                        List.of("Something unforeseen happened: java.lang.IllegalStateException: no quay")),
                run);
    }

    @Test
    void startsNothingOnBadInput() throws IOException {
        Files.delete(directory.resolve("plans/fare.yaml"));
        CommandRun run = CommandRun.of("watch", "--config", config.toString());
        assertEquals(
                new CommandRun(
                        2,
                        List.of(),
                        List.of(directory.resolve("plans")
                                + ": no plan files (expected: a directory with plan files (*.yaml, *.yml))")),
                run);
    }

    @Test
    void holdsTheProcessUntilTheCommandHasEnded() throws InterruptedException {
        ProcessStop stop = new ProcessStop();
        assertEquals(OptionalInt.empty(), stop.holdUntilEnded(Duration.ZERO), "nothing waits yet");
        stop.await();
        assertEquals(OptionalInt.empty(), stop.holdUntilEnded(Duration.ZERO), "the command takes too long");
        stop.ended(3);
        assertEquals(OptionalInt.of(3), stop.holdUntilEnded(Duration.ZERO));
    }

    private CommandRun watch(ServiceStarter starter) {
        TopicLookup lookup = (properties, topics) -> Map.of();
        return CommandRun.of(starter, lookup, () -> steps.add("stop"), "watch", "--config", config.toString());
    }
}
