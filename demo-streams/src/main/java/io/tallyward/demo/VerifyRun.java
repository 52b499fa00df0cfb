package io.tallyward.demo;

import io.tallyward.demo.check.Finding;
import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.TiedToParent;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;

/** Has the monitor's decisions verified from their topic, in a process of its own. */
final class VerifyRun {

    private static final Duration PATIENCE = Duration.ofMinutes(3);
    private static final String MAIN = "io.tallyward.service.Tallyward";
    private static final String SUBJECT = "every decision record from its own counts";

    private VerifyRun() {}

    /**
     * What verification says.
     *
     * @param configuration of the monitor
     * @param printed where to keep what it prints
     */
    static Finding of(Path configuration, Path printed) throws IOException, InterruptedException {
        try (ChildProcess verify = ChildProcess.start(
                "verify",
                printed,
                List.of("-Xmx256m", "-XX:+UseSerialGC"),
                List.of(
                        TiedToParent.class.getName(),
                        MAIN,
                        "verify",
                        "--topic",
                        "--config",
                        configuration.toString()))) {
            verify.awaitEnd(PATIENCE);
            return new Finding(SUBJECT, List.of());
        } catch (IllegalStateException e) {
            return new Finding(SUBJECT, List.of(e.getMessage()));
        }
    }
}
