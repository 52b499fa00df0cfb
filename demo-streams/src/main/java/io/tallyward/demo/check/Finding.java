package io.tallyward.demo.check;

import java.util.List;

/**
 * One comparison between the truth and the monitor.
 *
 * @param subject what was compared
 * @param differences what differs, in words; empty when the comparison holds
 */
public record Finding(String subject, List<String> differences) {

    public Finding {
        differences = List.copyOf(differences);
    }

    /** A finding that holds or does not. */
    public static Finding of(String subject, boolean holds, String difference) {
        return new Finding(subject, holds ? List.of() : List.of(difference));
    }

    public boolean holds() {
        return differences.isEmpty();
    }
}
