package io.tallyward.demo.bench;

import io.tallyward.demo.child.ChildProcess;
import java.io.IOException;
import java.nio.file.Files;
import java.time.Duration;
import java.util.List;

/** Measures the ledger's memory in a process of its own. */
final class MemoryRun {

    private static final Duration PATIENCE = Duration.ofMinutes(5);

    private MemoryRun() {}

    static MemoryResults measure(Stage stage) throws IOException, InterruptedException {
        try (ChildProcess child = stage.startTied(
                "memory",
                List.of("-Xmx2g", "-XX:+UseParallelGC"),
                List.of(MemoryMain.class.getName(), stage.directory().toString()))) {
            child.awaitEnd(PATIENCE);
        }
        return MemoryResults.in(Files.readString(stage.directory().resolve("memory.log")));
    }
}
