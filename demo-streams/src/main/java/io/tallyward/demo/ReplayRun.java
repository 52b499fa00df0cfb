package io.tallyward.demo;

import io.tallyward.demo.check.DecisionLog;
import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.TiedToParent;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.stream.StreamFile;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;

/** Replays the stream from a file in a process of its own, without broker or monitor. */
final class ReplayRun {

    private static final Duration PATIENCE = Duration.ofMinutes(3);
    private static final String MAIN = "io.tallyward.service.Tallyward";

    private ReplayRun() {}

    /** The decisions of an undisturbed replay, with the plans that lie in the directory. */
    static DecisionLog of(Scenario scenario, Path directory) throws IOException, InterruptedException {
        Path events = directory.resolve("stream.jsonl");
        StreamFile.write(scenario, events);
        Path printed = directory.resolve("replay.jsonl");
        try (ChildProcess replay = ChildProcess.start(
                "replay",
                printed,
                List.of("-Xmx512m", "-XX:+UseSerialGC"),
                List.of(
                        TiedToParent.class.getName(),
                        MAIN,
                        "replay",
                        "--json",
                        "--events",
                        events.toString(),
                        "--plans",
                        directory.resolve("plans").toString(),
                        "--partitions",
                        Integer.toString(DemoRun.PARTITIONS)))) {
            replay.awaitEnd(PATIENCE);
        }
        return DecisionLog.ofReplay(printed);
    }
}
