package io.tallyward.demo.child;

import java.io.IOException;
import java.io.OutputStream;
import java.lang.reflect.InvocationTargetException;
import java.util.Arrays;

/**
 * Runs another main class and ends with the process that started this one: {@code TiedToParent MAIN-CLASS ARGUMENT...}.
 * The end of standard input is the sign; it leads to an orderly stop, as a SIGTERM would.
 */
public final class TiedToParent {

    private TiedToParent() {}

    /** Never returns normally once the standard input has ended: the process then exits with 0. */
    public static void main(String[] arguments) throws ReflectiveOperationException {
        if (arguments.length == 0) {
            System.err.println("usage: TiedToParent MAIN-CLASS ARGUMENT...");
            System.exit(2);
        }
        Thread watcher = new Thread(TiedToParent::exitWithInput, "parent-watch");
        watcher.setDaemon(true);
        watcher.start();
        String[] rest = Arrays.copyOfRange(arguments, 1, arguments.length);
        try {
            Class.forName(arguments[0]).getMethod("main", String[].class).invoke(null, (Object) rest);
        } catch (InvocationTargetException failure) {
            failure.getCause().printStackTrace();
            System.exit(3);
        }
    }

    private static void exitWithInput() {
        try {
            System.in.transferTo(OutputStream.nullOutputStream());
        } catch (IOException brokenIsEnded) {
            System.err.println("parent-watch: standard input broke (" + brokenIsEnded.getMessage() + "); stopping");
        }
        System.exit(0);
    }
}
