package io.tallyward.demo.child;

import java.io.IOException;
import java.io.OutputStream;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;
import java.util.OptionalInt;
import java.util.concurrent.TimeUnit;
import java.util.stream.Stream;

/** A running Java process of the demo. Thread-safe. */
public final class ChildProcess implements AutoCloseable {

    private static final long ORDERLY_STOP_SECONDS = 15;
    private static final long TERMINATED_SECONDS = 5;
    private static final long KILLED_SECONDS = 5;
    private static final long POLL_MILLIS = 50;
    private static final int TAIL_LINES = 25;
    private static final double NANOS_PER_SECOND = 1e9;

    private final String name;
    private final Process process;
    private final Path log;

    private ChildProcess(String name, Process process, Path log) {
        this.name = name;
        this.process = process;
        this.log = log;
    }

    /**
     * Starts Java with the class path of this process.
     *
     * @param name what to call it in messages
     * @param log file to which its output is added
     * @param options options of the virtual machine
     * @param mainAndArguments main class and its arguments
     * @throws IOException when the process cannot be started
     */
    public static ChildProcess start(String name, Path log, List<String> options, List<String> mainAndArguments)
            throws IOException {
        String java = Path.of(System.getProperty("java.home"), "bin", "java").toString();
        List<String> command = Stream.of(
                        Stream.of(java),
                        options.stream(),
                        Stream.of("-cp", System.getProperty("java.class.path")),
                        mainAndArguments.stream())
                .flatMap(part -> part)
                .toList();
        Process process = new ProcessBuilder(command)
                .redirectErrorStream(true)
                .redirectOutput(ProcessBuilder.Redirect.appendTo(log.toFile()))
                .start();
        return new ChildProcess(name, process, log);
    }

    public boolean isAlive() {
        return process.isAlive();
    }

    /**
     * Waits until the process has written a text.
     *
     * @throws IllegalStateException when the process ends first or the patience does; the message shows its last lines
     */
    public void awaitOutput(String text, Duration patience) throws InterruptedException {
        long deadline = System.nanoTime() + patience.toNanos();
        while (!output().contains(text)) {
            requireAlive();
            if (System.nanoTime() > deadline) {
                throw new IllegalStateException(name + ": not ready after " + patience.toSeconds() + " s" + tail());
            }
            TimeUnit.MILLISECONDS.sleep(POLL_MILLIS);
        }
    }

    /**
     * Does nothing while the process lives.
     *
     * @throws IllegalStateException when it has ended; the message shows its last lines
     */
    public void requireAlive() {
        if (!process.isAlive()) {
            throw new IllegalStateException(name + ": ended with code " + process.exitValue() + tail());
        }
    }

    /**
     * Waits until the process has ended by itself.
     *
     * @throws IllegalStateException when it does not in time, or ends with another code than 0
     */
    public void awaitEnd(Duration patience) throws InterruptedException {
        if (!process.waitFor(patience.toMillis(), TimeUnit.MILLISECONDS)) {
            throw new IllegalStateException(name + ": not done after " + patience.toSeconds() + " s" + tail());
        }
        if (process.exitValue() != 0) {
            throw new IllegalStateException(name + ": ended with code " + process.exitValue() + tail());
        }
    }

    /** Kills the process at once, without any chance to tidy up, as {@code kill -9} does, and waits for its end. */
    public void kill() throws InterruptedException {
        process.destroyForcibly();
        if (!process.waitFor(KILLED_SECONDS, TimeUnit.SECONDS)) {
            throw new IllegalStateException(name + ": process " + process.pid() + " survives being killed");
        }
    }

    /**
     * Asks the process to stop, as {@code kill -TERM} does, and waits.
     *
     * @return the code it ended with; empty when it has not ended in time, and then it is still running
     */
    public OptionalInt terminate(Duration patience) {
        process.destroy();
        return endsWithin(patience) ? OptionalInt.of(process.exitValue()) : OptionalInt.empty();
    }

    /**
     * Freezes the process, as {@code kill -STOP} does, and thaws it after a number of seconds. A shell does both, so that
     * the process is thawed even if this one is gone by then.
     *
     * @throws IOException when no shell can be started
     */
    public void freeze(int seconds) throws IOException {
        String pid = Long.toString(process.pid());
        new ProcessBuilder("sh", "-c", "kill -STOP " + pid + "; sleep " + seconds + "; kill -CONT " + pid)
                .redirectErrorStream(true)
                .redirectOutput(ProcessBuilder.Redirect.DISCARD)
                .start();
    }

    /** Stops the process: by the end of its input, then by a signal, then by force; takes 25 seconds at most. */
    @Override
    public void close() {
        endInput();
        if (!endsWithin(Duration.ofSeconds(ORDERLY_STOP_SECONDS))) {
            process.destroy();
            if (!endsWithin(Duration.ofSeconds(TERMINATED_SECONDS))) {
                forceEnd();
            }
        }
    }

    /** Stops the process by the end of its input, and by force when it has not ended in time or the thread is interrupted. */
    public void stopWithin(Duration patience) {
        endInput();
        if (!endsWithin(patience)) {
            forceEnd();
        }
    }

    private void endInput() {
        try (OutputStream input = process.getOutputStream()) {
            input.flush();
        } catch (IOException alreadyGone) {
            process.destroy();
        }
    }

    private boolean endsWithin(Duration patience) {
        try {
            return process.waitFor(patience.toMillis(), TimeUnit.MILLISECONDS);
        } catch (InterruptedException hurry) {
            Thread.currentThread().interrupt();
            return false;
        }
    }

    /** Waits for the end even when interrupted: whoever stops the process goes on to remove its files. */
    private void forceEnd() {
        process.destroyForcibly()
                .onExit()
                .completeOnTimeout(process, KILLED_SECONDS, TimeUnit.SECONDS)
                .join();
    }

    /** CPU time the process has used so far, user and system, in seconds; 0 where the system does not tell. */
    public double cpuSeconds() {
        return process.info().totalCpuDuration().orElse(Duration.ZERO).toNanos() / NANOS_PER_SECOND;
    }

    /** The last lines the process wrote, under a heading; for messages. */
    public String tail() {
        List<String> lines = output().lines().toList();
        List<String> last = lines.subList(Math.max(0, lines.size() - TAIL_LINES), lines.size());
        return System.lineSeparator() + "the last lines of " + log + ":" + System.lineSeparator() + "  "
                + String.join(System.lineSeparator() + "  ", last);
    }

    /** What the process has written so far. */
    public String output() {
        try {
            return new String(Files.readAllBytes(log), StandardCharsets.UTF_8);
        } catch (IOException notYet) {
            return "";
        }
    }
}
