package io.tallyward.service.rehearse;

import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.inference.EffectScale;
import io.tallyward.statistics.inference.StagewiseInference;
import java.util.ArrayList;
import java.util.List;

/**
 * What the last look of a run says about the difference of rates, against the truth, which a rehearsal knows.
 *
 * <p>Naive is what ignores that there were looks before: the observed difference, and that difference with the usual
 * quantile of its standard error to each side. Adjusted are the median-unbiased estimate and the interval of the stage-wise
 * ordering (see {@link StagewiseInference}); the interval is not solved for, as whether it holds the truth can be read from
 * the probability of an end as extreme as this one under the truth.
 *
 * @param naive observed difference, variant minus control
 * @param adjusted median-unbiased estimate of the difference
 * @param naiveCovers whether the naive interval holds the truth
 * @param repeatedCovers whether the repeated confidence interval of the last look does
 * @param stagewiseCovers whether the interval of the stage-wise ordering does
 */
record StopEstimate(
        double naive, double adjusted, boolean naiveCovers, boolean repeatedCovers, boolean stagewiseCovers) {

    /**
     * Estimates at the last look.
     *
     * @param looks the looks of one challenger, in order; at least one
     * @param truth the true difference of rates
     * @param level of the intervals, in (0, 1)
     */
    static StopEstimate of(List<Comparison> looks, double truth, double level) {
        Comparison last = looks.get(looks.size() - 1);
        double reach = Normal.upperQuantile(0.5 * (1 - level)) / StrictMath.sqrt(last.information());
        StagewiseInference inference = StagewiseInference.of(path(looks), last.z());
        EffectScale scale = new EffectScale(last.information() / last.informationFraction());
        double extreme = inference.pUpper(scale.drift(truth));
        return new StopEstimate(
                last.difference(),
                scale.riskDifference(inference.medianUnbiasedDrift()),
                StrictMath.abs(last.difference() - truth) <= reach,
                orElse(last.differenceLower(), Double.NEGATIVE_INFINITY) <= truth
                        && truth <= orElse(last.differenceUpper(), Double.POSITIVE_INFINITY),
                StrictMath.abs(extreme - 0.5) <= 0.5 * level);
    }

    /** A last look that repeats the one before, as the data had not grown, takes its place. */
    private static List<Look> path(List<Comparison> looks) {
        List<Look> path = new ArrayList<>(looks.size());
        for (Comparison look : looks) {
            int last = path.size() - 1;
            if (last >= 0 && path.get(last).information() >= look.informationFraction()) {
                path.remove(last);
            }
            path.add(new Look(
                    path.size() + 1,
                    look.informationFraction(),
                    0.5 * look.alphaSpent(),
                    0.5 * look.alphaSpent(),
                    orElse(look.upper(), Double.POSITIVE_INFINITY),
                    orElse(look.lower(), Double.NEGATIVE_INFINITY)));
        }
        return path;
    }

    private static double orElse(Double bound, double none) {
        return bound == null ? none : bound;
    }
}
