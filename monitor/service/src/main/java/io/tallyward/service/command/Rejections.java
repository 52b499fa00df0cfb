package io.tallyward.service.command;

import io.tallyward.engine.event.RejectReason;
import java.nio.file.Path;
import java.util.Comparator;
import java.util.EnumMap;
import java.util.List;
import java.util.Map;

/** Which records of a file were rejected: how many for each reason, and the first of them in full. */
final class Rejections {

    private record First(RejectReason reason, long line, String detail) {}

    private final Map<RejectReason, Long> counts = new EnumMap<>(RejectReason.class);
    private final Map<RejectReason, First> firsts = new EnumMap<>(RejectReason.class);

    Rejections() {
        for (RejectReason reason : RejectReason.values()) {
            counts.put(reason, 0L);
        }
    }

    /**
     * Takes one record.
     *
     * @param line its line in the file, from 1
     * @param detail what is wrong with it, for people; never the identifier of a unit
     */
    void add(RejectReason reason, long line, String detail) {
        counts.merge(reason, 1L, Long::sum);
        firsts.putIfAbsent(reason, new First(reason, line, detail));
    }

    /** How many there were; every reason is present. */
    Map<RejectReason, Long> counts() {
        return counts;
    }

    /** The first record of each reason, by line, as in {@code bad.jsonl:51: unparsable: ... (2 of this kind)}. */
    List<String> sentences(Path file) {
        return firsts.values().stream()
                .sorted(Comparator.comparingLong(First::line))
                .map(first -> file + ":" + first.line() + ": " + first.reason().code() + ": " + first.detail() + " ("
                        + counts.get(first.reason()) + " of this kind)")
                .toList();
    }
}
