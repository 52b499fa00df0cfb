package io.tallyward.service.rehearse;

import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.statistics.distribution.Normal;
import java.util.Optional;

/**
 * What the record of the look that ended a comparison says about the difference of rates, against the truth, which a
 * rehearsal knows.
 *
 * <p>Naive is what ignores that there were looks before: the observed difference, and that difference with the usual
 * quantile of its standard error to each side. Adjusted are the median-unbiased estimate and the interval of the stage-wise
 * ordering.
 *
 * @param naive observed difference, variant minus control
 * @param adjusted median-unbiased estimate of the difference
 * @param level what the naive and the stage-wise interval promise, in (0, 1)
 * @param naiveCovers whether the naive interval holds the truth
 * @param repeatedCovers whether the repeated confidence interval does
 * @param stagewiseCovers whether the interval of the stage-wise ordering does
 */
record StopEstimate(
        double naive,
        double adjusted,
        double level,
        boolean naiveCovers,
        boolean repeatedCovers,
        boolean stagewiseCovers) {

    /**
     * Reads the estimates from a look.
     *
     * @param truth the true difference of rates
     * @return empty if the look did not end its comparison, or the record is bare
     */
    static Optional<StopEstimate> of(Comparison look, double truth) {
        Adjusted adjusted = look.adjusted();
        if (adjusted == null) {
            return Optional.empty();
        }
        double reach = Normal.upperQuantile(0.5 * (1 - adjusted.level())) / StrictMath.sqrt(look.information());
        return Optional.of(new StopEstimate(
                look.difference(),
                adjusted.difference().value(),
                adjusted.level(),
                StrictMath.abs(look.difference() - truth) <= reach,
                holds(look.differenceLower(), look.differenceUpper(), truth),
                holds(adjusted.difference().lower(), adjusted.difference().upper(), truth)));
    }

    private static boolean holds(Double lowerOrNull, Double upperOrNull, double truth) {
        return (lowerOrNull == null || lowerOrNull <= truth) && (upperOrNull == null || truth <= upperOrNull);
    }
}
