package io.tallyward.connector.embedded;

import java.io.IOException;
import java.io.InputStream;
import java.io.OutputStream;
import java.io.PrintStream;
import java.nio.file.Path;
import java.util.concurrent.CountDownLatch;

/**
 * Runs a broker as a process of its own: {@code EmbeddedBrokerMain DIRECTORY PORT}. It prints one line,
 * {@code broker ready at HOST:PORT}, and then serves until it is asked to stop by SIGTERM or by the end of its standard
 * input. The second way makes a broker end with the process that started it, even if that one is killed.
 */
public final class EmbeddedBrokerMain {

    private EmbeddedBrokerMain() {}

    /** Exits with 0 after an orderly stop, 2 on wrong arguments and 3 if the broker cannot start. */
    public static void main(String[] arguments) {
        int code = run(arguments, System.in, System.out, System.err);
        System.exit(code);
    }

    static int run(String[] arguments, InputStream in, PrintStream out, PrintStream err) {
        if (arguments.length != 2 || !arguments[1].matches("[0-9]{1,5}")) {
            err.println("usage: EmbeddedBrokerMain DIRECTORY PORT");
            return 2;
        }
        CountDownLatch stop = new CountDownLatch(1);
        try (EmbeddedBroker broker = EmbeddedBroker.start(Path.of(arguments[0]), Integer.parseInt(arguments[1]))) {
            Runtime.getRuntime().addShutdownHook(new Thread(broker::close, "embedded-broker-stop"));
            out.println("broker ready at " + broker.bootstrapServers());
            out.flush();
            Thread watcher = new Thread(() -> waitForEnd(in, stop), "embedded-broker-input");
            watcher.setDaemon(true);
            watcher.start();
            stop.await();
            return 0;
        } catch (IllegalArgumentException | IllegalStateException failure) {
            err.println(failure.getMessage() + reason(failure));
            return 3;
        } catch (InterruptedException interrupted) {
            Thread.currentThread().interrupt();
            return 0;
        }
    }

    private static void waitForEnd(InputStream in, CountDownLatch stop) {
        try {
            in.transferTo(OutputStream.nullOutputStream());
        } catch (IOException closed) {
            // a broken input is an ended one
        } finally {
            stop.countDown();
        }
    }

    private static String reason(Exception failure) {
        return failure.getCause() == null ? "" : " (" + failure.getCause().getMessage() + ")";
    }
}
