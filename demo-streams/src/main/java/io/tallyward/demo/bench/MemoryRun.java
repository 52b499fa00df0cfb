package io.tallyward.demo.bench;

import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.TiedToParent;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;

/** Measures the ledger's memory in a process of its own. */
final class MemoryRun {

    private static final Duration PATIENCE = Duration.ofMinutes(5);

    private MemoryRun() {}

    static List<String> measure(Path directory) throws IOException, InterruptedException {
        Path log = directory.resolve("memory.log");
        try (ChildProcess child = ChildProcess.start(
                "memory",
                log,
                List.of("-Xmx2g", "-XX:+UseParallelGC"),
                List.of(TiedToParent.class.getName(), MemoryMain.class.getName(), directory.toString()))) {
            child.awaitEnd(PATIENCE);
        }
        return Files.readAllLines(log);
    }
}
