package io.tallyward.engine.decide;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.Plan;
import java.util.Locale;

/**
 * How much more frequent orphans are among the clicks of one variant than among those of the others. A click is an orphan when
 * its view was lost; that happens as often under every variant, whatever its rate of clicks, unless views of one variant are
 * lost.
 *
 * @param variant position of the variant
 * @param share orphans in orphans and successes of the variant
 * @param others the same of the other variants together
 */
record OrphanGap(int variant, double share, double others) {

    /** Shares are not compared on fewer clicks than this on either side. */
    static final long CLICKS_TO_COMPARE = 1_000;

    private static final OrphanGap NONE = new OrphanGap(0, 0, 0);

    double difference() {
        return share - others;
    }

    /** The widest gap of a variant that is not left out; none where there is too little to compare. */
    static OrphanGap widest(Plan plan, OutcomeCounts outcomes, CumulativeCounts counts, boolean[] leftOut) {
        long orphans = 0;
        long clicks = 0;
        for (int variant = 0; variant < leftOut.length; variant++) {
            if (!leftOut[variant]) {
                orphans += outcomes.orphans(variant);
                clicks += clicks(variant, outcomes, counts);
            }
        }
        OrphanGap widest = NONE;
        for (int variant = 0; variant < leftOut.length; variant++) {
            long own = clicks(variant, outcomes, counts);
            if (!leftOut[variant] && own >= CLICKS_TO_COMPARE && clicks - own >= CLICKS_TO_COMPARE) {
                double share = (double) outcomes.orphans(variant) / own;
                double others = (double) (orphans - outcomes.orphans(variant)) / (clicks - own);
                OrphanGap gap = new OrphanGap(variant, share, others);
                widest = gap.difference() > widest.difference() ? gap : widest;
            }
        }
        return widest;
    }

    private static long clicks(int variant, OutcomeCounts outcomes, CumulativeCounts counts) {
        return outcomes.orphans(variant) + counts.successes(variant);
    }

    String words(Plan plan) {
        return String.format(
                Locale.ROOT,
                "%.2f %% of the clicks under %s have no view before them, and %.2f %% of the others (limit of the difference"
                        + " %.2f %%)",
                100 * share,
                plan.variants().get(variant).name(),
                100 * others,
                100 * plan.trust().orphanGap());
    }
}
