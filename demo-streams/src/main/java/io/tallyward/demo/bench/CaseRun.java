package io.tallyward.demo.bench;

import io.tallyward.demo.child.ChildProcess;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;

/** Lets a case read a topic in a process of its own. */
final class CaseRun {

    /** Slower than this, something is wrong. */
    private static final long LEAST_EVENTS_PER_SECOND = 5_000;

    private final Stage stage;
    private final Path recordings;

    /** @param recordings where to leave a flight recording of each run; null for none */
    CaseRun(Stage stage, Path recordings) {
        this.stage = stage;
        this.recordings = recordings;
    }

    /**
     * Runs a case and waits for it.
     *
     * @throws IllegalStateException when it fails, or has not counted what it should
     */
    Measurement run(BenchCase which, CaseMain.Task task) throws IOException, InterruptedException {
        stage.requireBroker();
        try (ChildProcess child = stage.startTied(task.run(), virtualMachine(task.run()), task.command(which))) {
            child.awaitEnd(Stage.START_PATIENCE.plusSeconds(task.events() / LEAST_EVENTS_PER_SECOND));
        }
        return Measurement.in(Files.readString(stage.directory().resolve(task.run() + ".log")));
    }

    private List<String> virtualMachine(String name) {
        List<String> virtualMachine = new ArrayList<>(List.of("-Xmx1g", "-XX:+UseParallelGC", Stage.LOGGING));
        if (recordings != null) {
            virtualMachine.add(
                    "-XX:StartFlightRecording=settings=profile,filename=" + recordings.resolve(name + ".jfr"));
        }
        return virtualMachine;
    }
}
