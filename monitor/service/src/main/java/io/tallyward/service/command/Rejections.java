package io.tallyward.service.command;

import io.tallyward.engine.event.RejectReason;
import io.tallyward.service.config.document.Problem;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.EnumMap;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/**
 * Which records of an input were rejected: how many for each reason, and of each reason the first few different kinds, with
 * their first record.
 */
final class Rejections {

    /** More different problems of one reason than this are only counted. */
    private static final int MOST_KINDS = 5;

    /**
     * Where a record lies.
     *
     * @param name the file, or the partition and offset
     * @param line its line in the file, from 1; 0 where there are no lines
     */
    record Origin(String name, long line) {}

    /** Records with the same problem: where the first of them lies, and how many. */
    private static final class Kind {
        private final RejectReason reason;
        private final Origin first;
        private final int order;
        private final String detail;
        private long records;

        Kind(RejectReason reason, Origin first, int order, String detail) {
            this.reason = reason;
            this.first = first;
            this.order = order;
            this.detail = detail;
        }
    }

    private final Map<RejectReason, Long> counts = new EnumMap<>(RejectReason.class);
    private final Map<RejectReason, Map<String, Kind>> kinds = new EnumMap<>(RejectReason.class);

    private int order;

    Rejections() {
        for (RejectReason reason : RejectReason.values()) {
            counts.put(reason, 0L);
            kinds.put(reason, new LinkedHashMap<>());
        }
    }

    /**
     * Takes one record.
     *
     * @param origin where it lies
     * @param detail what is wrong with it, for people; never the identifier of a unit
     */
    void add(RejectReason reason, Origin origin, String detail) {
        counts.merge(reason, 1L, Long::sum);
        Map<String, Kind> known = kinds.get(reason);
        if (known.size() < MOST_KINDS) {
            known.putIfAbsent(detail, new Kind(reason, origin, order++, detail));
        }
        Kind kind = known.get(detail);
        if (kind != null) {
            kind.records++;
        }
    }

    /** How many there were; every reason is present. */
    Map<RejectReason, Long> counts() {
        return counts;
    }

    /**
     * The first record of each kind, in the order they came, as in {@code bad.jsonl:51: unparsable: ... (2 of this kind)}.
     *
     * @param input what the input as a whole is called
     */
    List<Problem> problems(String input) {
        List<Problem> problems = new ArrayList<>();
        kinds.values().stream()
                .flatMap(known -> known.values().stream())
                .sorted(Comparator.comparingInt(kind -> kind.order))
                .map(kind -> new Problem(
                        kind.first.name(),
                        Math.toIntExact(Math.min(kind.first.line(), Integer.MAX_VALUE)),
                        kind.reason.code(),
                        kind.detail + " (" + kind.records + " of this kind)",
                        "",
                        ""))
                .forEach(problems::add);
        kinds.forEach((reason, known) -> {
            long shown = known.values().stream().mapToLong(kind -> kind.records).sum();
            if (shown < counts.get(reason)) {
                problems.add(new Problem(
                        input,
                        0,
                        reason.code(),
                        (counts.get(reason) - shown) + " more, for other details than these",
                        "",
                        ""));
            }
        });
        return problems;
    }
}
