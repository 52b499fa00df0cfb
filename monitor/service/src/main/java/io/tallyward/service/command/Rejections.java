package io.tallyward.service.command;

import io.tallyward.engine.event.RejectReason;
import io.tallyward.service.config.document.Problem;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.EnumMap;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/**
 * Which records of a file were rejected: how many for each reason, and of each reason the first few different kinds, with
 * their first record.
 */
final class Rejections {

    /** More different problems of one reason than this are only counted. */
    private static final int MOST_KINDS = 5;

    /** Records with the same problem: the line of the first of them, and how many. */
    private static final class Kind {
        private final RejectReason reason;
        private final long line;
        private final String detail;
        private long records;

        Kind(RejectReason reason, long line, String detail) {
            this.reason = reason;
            this.line = line;
            this.detail = detail;
        }
    }

    private final Map<RejectReason, Long> counts = new EnumMap<>(RejectReason.class);
    private final Map<RejectReason, Map<String, Kind>> kinds = new EnumMap<>(RejectReason.class);

    Rejections() {
        for (RejectReason reason : RejectReason.values()) {
            counts.put(reason, 0L);
            kinds.put(reason, new LinkedHashMap<>());
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
        Map<String, Kind> known = kinds.get(reason);
        if (known.size() < MOST_KINDS) {
            known.putIfAbsent(detail, new Kind(reason, line, detail));
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

    /** The first record of each kind, by line, as in {@code bad.jsonl:51: unparsable: ... (2 of this kind)}. */
    List<Problem> problems(Path file) {
        List<Problem> problems = new ArrayList<>();
        kinds.values().stream()
                .flatMap(known -> known.values().stream())
                .sorted(Comparator.comparingLong(kind -> kind.line))
                .map(kind -> new Problem(
                        file.toString(),
                        Math.toIntExact(Math.min(kind.line, Integer.MAX_VALUE)),
                        kind.reason.code(),
                        kind.detail + " (" + kind.records + " of this kind)",
                        "",
                        ""))
                .forEach(problems::add);
        kinds.forEach((reason, known) -> {
            long shown = known.values().stream().mapToLong(kind -> kind.records).sum();
            if (shown < counts.get(reason)) {
                problems.add(new Problem(
                        file.toString(),
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
