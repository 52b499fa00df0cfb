package io.tallyward.engine.decide;

import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import java.util.List;
import java.util.Locale;
import java.util.Map;

/** Puts into words where a mismatch of the split comes from. */
final class SplitWords {

    /** Departures that differ by less are equally large. */
    private static final double EVEN = 1e-9;

    private SplitWords() {}

    /** What follows the sentence about the mismatch. */
    static String of(SplitOrigin origin) {
        String began = "it began between " + origin.beganFrom() + " and " + origin.beganUntil();
        SegmentSplit worst = origin.worst();
        if (worst == null) {
            return began;
        }
        return worst.standsOut()
                ? began + ", with " + name(worst) + ": " + share(worst.units())
                : began + ", in no single segment; furthest off is " + name(worst) + ": " + share(worst.units());
    }

    /** Named figures for a notice. */
    static void addFacts(Map<String, String> facts, SplitOrigin origin) {
        facts.put("beganFrom", origin.beganFrom().toString());
        facts.put("beganUntil", origin.beganUntil().toString());
        facts.put("sharesSince", share(origin.since()));
        SegmentSplit worst = origin.worst();
        if (worst != null) {
            facts.put("worstSegment", name(worst));
            facts.put("worstSegmentStandsOut", Boolean.toString(worst.standsOut()));
            facts.put("worstSegmentShares", share(worst.units()));
            facts.put("sharesElsewhere", share(worst.elsewhere()));
        }
    }

    private static String name(SegmentSplit segment) {
        return segment.field() + " " + segment.value();
    }

    /** The share of the variant that is furthest off the plan; of two equally far the one that lacks units. */
    private static String share(List<PlannedUnits> units) {
        double total = units.stream().mapToLong(PlannedUnits::units).sum();
        if (total == 0) {
            return "no units";
        }
        PlannedUnits shown = units.get(0);
        double furthest = 0;
        for (PlannedUnits variant : units) {
            double expected = variant.planned() * total;
            double off = (variant.units() - expected) / StrictMath.sqrt(expected);
            double lead = StrictMath.abs(off) - StrictMath.abs(furthest);
            if (lead > EVEN || (lead > -EVEN && off < 0)) {
                shown = variant;
                furthest = off;
            }
        }
        return String.format(
                Locale.ROOT,
                "%s has %.2f %% of %.0f units, planned %.2f %%",
                shown.variant(),
                100 * shown.units() / total,
                total,
                100 * shown.planned());
    }
}
