package io.tallyward.demo.child;

import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.concurrent.CountDownLatch;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class ChildProcessIT {

    private static final Duration PATIENCE = Duration.ofSeconds(30);

    @TempDir
    private Path directory;

    /** Says that it runs, then waits for ever or fails. */
    public static final class Told {

        private Told() {}

        public static void main(String[] arguments) throws InterruptedException {
            System.out.println("running");
            if (arguments.length > 0) {
                throw new IllegalStateException("told to fail");
            }
            new CountDownLatch(1).await();
        }
    }

    @Test
    void endsInGoodOrderWithItsInput() throws Exception {
        ChildProcess child = start("orderly");
        child.awaitOutput("running", PATIENCE);
        child.close();
        assertFalse(child.isAlive());
    }

    @Test
    void endsAtOnceWhenKilled() throws Exception {
        ChildProcess child = start("killed");
        child.awaitOutput("running", PATIENCE);
        child.kill();
        assertFalse(child.isAlive());
        child.close();
    }

    @Test
    void isKilledWhenItsEndWouldTakeTooLong() throws Exception {
        ChildProcess child = ChildProcess.start(
                "deaf", directory.resolve("deaf.log"), List.of("-Xmx64m"), List.of(Told.class.getName()));
        child.awaitOutput("running", PATIENCE);
        child.stopWithin(Duration.ofMillis(100));
        assertFalse(child.isAlive());
    }

    @Test
    void isKilledAtOnceWhenTheThreadIsInterrupted() throws Exception {
        ChildProcess child = ChildProcess.start(
                "hurried", directory.resolve("hurried.log"), List.of("-Xmx64m"), List.of(Told.class.getName()));
        child.awaitOutput("running", PATIENCE);
        Thread.currentThread().interrupt();
        child.close();
        assertTrue(Thread.interrupted());
        assertFalse(child.isAlive());
    }

    @Test
    void showsItsLastWordsWhenItFails() throws Exception {
        try (ChildProcess child = start("failing", "fail")) {
            IllegalStateException failure =
                    assertThrows(IllegalStateException.class, () -> child.awaitOutput("never said", PATIENCE));
            assertTrue(failure.getMessage().contains("told to fail"), failure.getMessage());
        }
    }

    private ChildProcess start(String name, String... arguments) throws Exception {
        List<String> command = new ArrayList<>(List.of(TiedToParent.class.getName(), Told.class.getName()));
        command.addAll(List.of(arguments));
        return ChildProcess.start(name, directory.resolve(name + ".log"), List.of("-Xmx64m"), command);
    }
}
