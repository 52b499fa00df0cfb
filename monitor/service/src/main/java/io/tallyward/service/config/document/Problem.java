package io.tallyward.service.config.document;

import java.util.Objects;

/**
 * One thing that is wrong with what the user gave us.
 *
 * @param file the file as the user named it; empty when the problem lies in no file
 * @param line line in the file, from 1; 0 when the problem has no line of its own
 * @param key path of the key, as in {@code test.alpha}; empty when the problem concerns the file as a whole
 * @param found what is there, or {@code missing}; never a secret
 * @param expected what should be there
 * @param remedy what to do, as a sentence; empty when {@code expected} says it all
 */
public record Problem(String file, int line, String key, String found, String expected, String remedy) {

    public Problem {
        Objects.requireNonNull(file, "file");
        Objects.requireNonNull(key, "key");
        Objects.requireNonNull(found, "found");
        Objects.requireNonNull(expected, "expected");
        Objects.requireNonNull(remedy, "remedy");
    }

    /** A problem without a line or a key: the file as a whole, or the surroundings. */
    public static Problem of(String where, String found, String expected, String remedy) {
        return new Problem(where, 0, "", found, expected, remedy);
    }

    /** File and line, as in {@code plans/quay-banner.yaml:7}. */
    public String where() {
        return line > 0 ? file + ":" + line : file;
    }

    /** The whole problem on one line, as in {@code tallyward.yaml:3: workers: 0 (expected: whole number from 1 to 64)}. */
    public String message() {
        StringBuilder text = new StringBuilder();
        if (!file.isEmpty()) {
            text.append(where()).append(": ");
        }
        if (!key.isEmpty()) {
            text.append(key).append(": ");
        }
        text.append(found);
        if (!expected.isEmpty()) {
            text.append(" (expected: ").append(expected).append(')');
        }
        if (!remedy.isEmpty()) {
            text.append(". ").append(remedy);
        }
        return text.toString();
    }
}
