package io.tallyward.demo;

import java.io.PrintStream;

/**
 * What the demo says. On a terminal the last line is overwritten by each report of progress; elsewhere progress is only
 * shown where it marks a step. Thread-safe.
 */
final class Screen {

    private final PrintStream out;
    private final boolean terminal;
    private int progressLength;

    Screen(PrintStream out, boolean terminal) {
        this.out = out;
        this.terminal = terminal;
    }

    static Screen standard() {
        return new Screen(System.out, System.console() != null);
    }

    synchronized void line(String text) {
        clearProgress();
        out.println(text);
        out.flush();
    }

    /** Shows how far the demo is; {@code step} when this is worth a line of its own. */
    synchronized void progress(String text, boolean step) {
        if (terminal) {
            clearProgress();
            out.print(text);
            progressLength = text.length();
        } else if (step) {
            out.println(text);
        }
        out.flush();
    }

    private void clearProgress() {
        if (progressLength > 0) {
            out.print("\r" + " ".repeat(progressLength) + "\r");
            progressLength = 0;
        }
    }
}
