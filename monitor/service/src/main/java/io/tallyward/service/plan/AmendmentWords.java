package io.tallyward.service.plan;

import io.tallyward.engine.plan.Amendment;
import java.util.TreeMap;
import java.util.stream.Collectors;

/** Amendments in words. */
public final class AmendmentWords {

    private AmendmentWords() {}

    /** What changes, as in {@code the run ends 2026-06-08T00:00:00Z}. */
    public static String of(Amendment.Change change) {
        if (change instanceof Amendment.End other) {
            return "the run ends " + other.end();
        }
        if (change instanceof Amendment.Shares other) {
            return "shares "
                    + new TreeMap<>(other.shares())
                            .entrySet().stream()
                                    .map(share -> share.getKey() + " " + PlanWords.shortest(share.getValue()))
                                    .collect(Collectors.joining(", "));
        }
        return "stopped by the owner";
    }
}
