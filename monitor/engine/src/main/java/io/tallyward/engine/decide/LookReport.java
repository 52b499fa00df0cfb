package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.inference.ConditionalPower;
import io.tallyward.statistics.inference.EffectScale;
import io.tallyward.statistics.inference.Estimate;
import io.tallyward.statistics.inference.Interval;
import io.tallyward.statistics.inference.StagewiseInference;
import java.util.List;
import java.util.Locale;

/** Puts a look into numbers and words for the record. */
final class LookReport {

    private final String variant;
    private final boolean higherIsBetter;
    private final double drift;
    private final Detail detail;

    LookReport(Plan plan, String variant, PlanDesign design, Detail detail) {
        this.variant = variant;
        this.detail = detail;
        higherIsBetter = plan.test().better() == Better.HIGHER;
        drift = design.drift();
    }

    /**
     * What came of a look.
     *
     * @param finding what the look found
     * @param verdict the verdict as told
     * @param heldOrNull the verdict that waits for trust
     * @param independent what the look would have found had the views of a unit been independent; the finding itself where
     *     units are counted
     */
    record Outcome(Verdict finding, Verdict verdict, Verdict heldOrNull, Verdict independent) {}

    /**
     * Writes a comparison.
     *
     * @param looks all looks taken, this one last
     */
    Comparison write(Sitting sitting, TailLevels levels, LookPath.Bounds bounds, List<Look> looks, Outcome outcome) {
        Look look = bounds.look();
        double z = sitting.found().z();
        double scale = StrictMath.sqrt(sitting.found().information());
        double lower = (z - look.upper()) / scale;
        double upper = (z - look.lower()) / scale;
        boolean crossedOrUsedUp = outcome.finding().settled() && outcome.finding() != Verdict.STOP_FUTILITY;
        boolean bare = detail == Detail.BARE;
        return new Comparison(
                variant,
                look.number(),
                z,
                sitting.found().information(),
                sitting.fraction(),
                sitting.time(),
                levels.both(),
                look.upperSpent() + look.lowerSpent(),
                finite(look.upper()),
                finite(look.lower()),
                finite(higherIsBetter ? bounds.futility() : -bounds.futility()),
                sitting.found().difference(),
                finite(lower),
                finite(upper),
                bare
                        ? null
                        : sitting.found()
                                .liftScale()
                                .map(lift -> estimated(lift.lift(new Estimate(
                                        sitting.found().difference(), new Interval(lower, upper, 1 - levels.both())))))
                                .orElse(null),
                crossedOrUsedUp ? null : outlook(sitting.fraction(), z, bounds.critical()),
                crossedOrUsedUp && !bare ? adjusted(sitting, levels, looks) : null,
                bare ? null : sitting.found().clustering().orElse(null),
                outcome.verdict(),
                outcome.heldOrNull(),
                bare ? "" : reason(look, outcome, sitting));
    }

    private Outlook outlook(double fraction, double z, double critical) {
        if (Double.isInfinite(critical) || detail == Detail.BARE) {
            return null;
        }
        ConditionalPower power = ConditionalPower.of(
                fraction, higherIsBetter ? z : -z, new double[] {1}, new double[] {critical}, new double[] {
                    Double.NEGATIVE_INFINITY
                });
        return new Outlook(power.underTrend(), power.under(drift), power.withoutEffect(), power.predictive());
    }

    private Adjusted adjusted(Sitting sitting, TailLevels levels, List<Look> looks) {
        StagewiseInference stop = StagewiseInference.of(looks, sitting.found().z());
        double upperLevel = higherIsBetter ? levels.benefit() : levels.harm();
        double lowerLevel = higherIsBetter ? levels.harm() : levels.benefit();
        Estimate estimate = new Estimate(stop.medianUnbiasedDrift(), interval(stop, upperLevel, lowerLevel));
        double clock = looks.get(looks.size() - 1).information();
        Estimate difference = new EffectScale(sitting.found().information() / clock).riskDifference(estimate);
        return new Adjusted(
                pValue(stop, levels.both(), upperLevel, lowerLevel),
                estimate.interval().level(),
                estimated(scaled(estimate, StrictMath.sqrt(clock / sitting.fraction()))),
                estimated(difference),
                sitting.found()
                        .liftScale()
                        .filter(lift -> StrictMath.abs(difference.value()) <= 1)
                        .map(lift -> estimated(lift.lift(difference)))
                        .orElse(null));
    }

    /** From the clock of the looks to that of information. */
    private static Estimate scaled(Estimate drift, double factor) {
        Interval interval = drift.interval();
        return new Estimate(
                drift.value() * factor,
                new Interval(interval.lower() * factor, interval.upper() * factor, interval.level()));
    }

    /** The smaller of the tails' p-values, each weighted by its share of the level; at most 1. */
    private static double pValue(StagewiseInference stop, double level, double upperLevel, double lowerLevel) {
        double up = upperLevel > 0 ? stop.pUpper() * (level / upperLevel) : 1;
        double down = lowerLevel > 0 ? stop.pLower() * (level / lowerLevel) : 1;
        return StrictMath.min(1, StrictMath.min(up, down));
    }

    /**
     * The end that a benefit or a harm has to clear carries the error of that direction, so that interval and verdict agree.
     * A direction that is not tested gets as much as the other.
     */
    private static Interval interval(StagewiseInference stop, double upperLevel, double lowerLevel) {
        double below = upperLevel == 0 ? lowerLevel : upperLevel;
        double above = lowerLevel == 0 ? upperLevel : lowerLevel;
        Interval fromBelow = stop.interval(1 - 2 * below);
        double upperEnd = above == below
                ? fromBelow.upper()
                : stop.interval(1 - 2 * above).upper();
        return new Interval(fromBelow.lower(), upperEnd, 1 - below - above);
    }

    private static Estimated estimated(Estimate estimate) {
        return new Estimated(
                estimate.value(),
                finite(estimate.interval().lower()),
                finite(estimate.interval().upper()));
    }

    private static Double finite(double value) {
        return Double.isInfinite(value) ? null : value;
    }

    private static String reason(Look look, Outcome outcome, Sitting sitting) {
        double z = sitting.found().z();
        String text = switch (outcome.finding()) {
            case STOP_BENEFIT -> "z %.3f has reached the benefit boundary %.3f";
            case STOP_HARM -> "z %.3f has reached the harm boundary %.3f";
            case STOP_FUTILITY -> "z %.3f makes a benefit unlikely within the planned information";
            case EXHAUSTED -> "the planned information or time is used up and z %.3f has crossed no boundary";
            case CONTINUE, WAITING, STOPPED -> "z %.3f lies between the boundaries";
        };
        double crossed = z >= look.upper() ? look.upper() : look.lower();
        String reason = String.format(Locale.ROOT, text, z, crossed);
        return reason
                + (sitting.caution().isEmpty() ? "" : "; " + sitting.caution())
                + warning(outcome, sitting)
                + (outcome.heldOrNull() == null ? "" : "; held until the data are trusted again");
    }

    /** Said only where it matters: whoever takes views for independent would have been told something else. */
    private static String warning(Outcome outcome, Sitting sitting) {
        if (outcome.independent() == outcome.finding()) {
            return "";
        }
        return sitting.found()
                .clustering()
                .map(clustering -> String.format(
                        Locale.ROOT,
                        "; taking views for independent would give z %.3f and say %s instead, but the views of a unit are not"
                                + " (design effect %.2f)",
                        clustering.independentZ(),
                        outcome.independent().code(),
                        clustering.designEffect()))
                .orElse("");
    }
}
