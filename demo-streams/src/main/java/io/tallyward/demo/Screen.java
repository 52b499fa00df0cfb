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
    private boolean silent;

    Screen(PrintStream out, boolean terminal) {
        this.out = out;
        this.terminal = terminal;
    }

    static Screen standard() {
        return new Screen(System.out, System.console() != null);
    }

    synchronized void line(String text) {
        if (!silent) {
            clearProgress();
            out.println(text);
            out.flush();
        }
    }

    /** Says this below whatever is on the screen, and nothing but alerts afterwards. */
    synchronized void lastLine(String text) {
        if (progressLength > 0) {
            out.println();
            progressLength = 0;
        }
        line(text);
        silent = true;
    }

    /** Says what must be known even after the last line. */
    synchronized void alert(String text) {
        clearProgress();
        out.println(text);
        out.flush();
    }

    /** Shows how far the demo is; {@code step} when this is worth a line of its own. */
    synchronized void progress(String text, boolean step) {
        if (silent) {
            return;
        }
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
