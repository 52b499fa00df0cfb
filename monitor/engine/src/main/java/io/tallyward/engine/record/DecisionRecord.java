package io.tallyward.engine.record;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.Plan;
import java.time.Instant;
import java.util.List;
import java.util.Locale;

/**
 * One decision about one experiment with everything needed to make it again. Records of an experiment form a chain: each
 * names the digest of its predecessor, and the first carries the plan.
 *
 * @param experiment name of the experiment
 * @param sequence 1 for the experiment's first record, then 2, 3, ...
 * @param occasion why the record was written
 * @param windowEnd end of the last complete window the decision is based on; the start of the run in the first record
 * @param planDigest digest of the plan it was made under
 * @param plan the plan as it was frozen, in the first record of an experiment; null in all others
 * @param amendment what takes effect at the end of the next window; null unless that is the occasion
 * @param counts cumulative counts up to {@code windowEnd}, by allocation epoch and variant
 * @param outcomes cumulative outcomes of the events of these windows
 * @param idleSealed how many of the windows were sealed, in some partition, because it was idle
 * @param split what the split checks say
 * @param trust whether the data are trusted
 * @param trustReason why, in words; empty while sound
 * @param silence what is silent; null unless trust is {@link Trust#STARVED}
 * @param verdict the verdict on the experiment
 * @param comparisons one entry per challenger that was looked at; empty unless the occasion is a look
 * @param engineVersion version of the deciding rules
 * @param previous digest of the preceding record; 64 zeros for the first
 * @param hash digest of this record
 */
public record DecisionRecord(
        String experiment,
        int sequence,
        Occasion occasion,
        Instant windowEnd,
        String planDigest,
        Plan plan,
        Amendment amendment,
        List<VariantCount> counts,
        OutcomeCounts outcomes,
        long idleSealed,
        Split split,
        Trust trust,
        String trustReason,
        Silence silence,
        Verdict verdict,
        List<Comparison> comparisons,
        String engineVersion,
        String previous,
        String hash) {

    /** The {@code previous} of an experiment's first record. */
    public static final String NO_PREVIOUS = "0".repeat(64);

    public DecisionRecord {
        counts = List.copyOf(counts);
        comparisons = List.copyOf(comparisons);
    }

    /** A record that carries neither plan nor amendment, of data in which nothing is silent. */
    public DecisionRecord(
            String experiment,
            int sequence,
            Occasion occasion,
            Instant windowEnd,
            String planDigest,
            List<VariantCount> counts,
            OutcomeCounts outcomes,
            long idleSealed,
            Split split,
            Trust trust,
            String trustReason,
            Verdict verdict,
            List<Comparison> comparisons,
            String engineVersion,
            String previous,
            String hash) {
        this(
                experiment,
                sequence,
                occasion,
                windowEnd,
                planDigest,
                null,
                null,
                counts,
                outcomes,
                idleSealed,
                split,
                trust,
                trustReason,
                null,
                verdict,
                comparisons,
                engineVersion,
                previous,
                hash);
    }

    /** The same record in another place of a chain. */
    public DecisionRecord chained(String newPrevious, String newHash) {
        return new DecisionRecord(
                experiment,
                sequence,
                occasion,
                windowEnd,
                planDigest,
                plan,
                amendment,
                counts,
                outcomes,
                idleSealed,
                split,
                trust,
                trustReason,
                silence,
                verdict,
                comparisons,
                engineVersion,
                newPrevious,
                newHash);
    }

    /** Why a record was written. */
    public enum Occasion {
        /** The experiment begins: the plan is frozen. */
        PLAN,
        /** A look was taken at one or more comparisons. */
        LOOK,
        /** Trust changed between looks. */
        TRUST,
        /** An amendment of the plan takes effect at the end of the next window. */
        AMENDED,
        /** The run ended and no further look could be taken. */
        END;

        /** The published code, as in {@code look}. */
        public String code() {
            return name().toLowerCase(Locale.ROOT);
        }
    }

    /**
     * Cumulative counts of one variant during one allocation epoch.
     *
     * @param epoch index of the allocation epoch
     * @param variant name of the variant
     * @param trials units, or views where the plan counts views
     * @param successes trials with a click in time
     * @param unitTotals sums over units; null where the plan counts units, as each is one trial
     */
    public record VariantCount(int epoch, String variant, long trials, long successes, UnitTotals unitTotals) {

        /** Counts of units of which each is one trial. */
        public VariantCount(int epoch, String variant, long trials, long successes) {
            this(epoch, variant, trials, successes, null);
        }

        /** How many units there are. */
        public long units() {
            return unitTotals == null ? trials : unitTotals.units();
        }
    }

    /**
     * What the split checks say.
     *
     * @param logBayesFactor natural logarithm of the evidence against the planned split, now
     * @param sequentialPValue valid however often it is read: one over the largest evidence so far, at most 1
     * @param pearsonChiSquare Pearson's statistic on the current counts, summed over epochs; for the record only
     * @param pearsonDegreesOfFreedom its degrees of freedom; 0 before there are trials
     * @param pearsonPValue its p-value for a single reading
     * @param peak the largest evidence so far; null while none spoke against the planned split
     * @param origin where a mismatch comes from; null while there is none and where the record is bare
     */
    public record Split(
            double logBayesFactor,
            double sequentialPValue,
            double pearsonChiSquare,
            int pearsonDegreesOfFreedom,
            double pearsonPValue,
            SplitPeak peak,
            SplitOrigin origin) {

        /** What the split checks say while nothing has spoken against the planned split. */
        public Split(
                double logBayesFactor,
                double sequentialPValue,
                double pearsonChiSquare,
                int pearsonDegreesOfFreedom,
                double pearsonPValue) {
            this(
                    logBayesFactor,
                    sequentialPValue,
                    pearsonChiSquare,
                    pearsonDegreesOfFreedom,
                    pearsonPValue,
                    null,
                    null);
        }
    }

    /**
     * One look at one challenger.
     *
     * @param variant the challenger
     * @param look number of this look for this comparison, from 1
     * @param z statistic of variant minus control, stratified by epoch: pooled two-proportion, or, where the plan counts
     *     views, with each arm's own variance between units
     * @param information Fisher information about the difference of rates, 1 / variance
     * @param informationFraction information over its planned maximum; may exceed 1 at the last look
     * @param spendingTime moment on the clock that error is spent by, in [0, 1]; 1 at the last look
     * @param level level of this comparison over all looks, both tails together; rises when others pass theirs on
     * @param alphaSpent cumulative alpha spent at this look, both tails together
     * @param upper upper boundary for z, null when the upper tail spends nothing at this look
     * @param lower lower boundary for z, null when the lower tail spends nothing at this look
     * @param futility futility boundary for z in the direction of benefit, null when there is none
     * @param difference estimated difference of rates, variant minus control (naive, not adjusted for stopping)
     * @param differenceLower lower end of the repeated confidence interval, null when unbounded
     * @param differenceUpper upper end of the repeated confidence interval, null when unbounded
     * @param lift the same relative to the control's rate, with its repeated confidence interval; null while the control
     *     has no success
     * @param outlook how likely a benefit still is; null at a last look and where the record is bare
     * @param adjusted estimates adjusted for the looks taken; null while the comparison goes on and after futility
     * @param clustering how much the views of a unit depend on each other; null where the plan counts units and where the
     *     record is bare
     * @param verdict the verdict on this comparison, as told
     * @param held the verdict that waits for trust to return, null when none does
     * @param reason why, in words
     */
    public record Comparison(
            String variant,
            int look,
            double z,
            double information,
            double informationFraction,
            double spendingTime,
            double level,
            double alphaSpent,
            Double upper,
            Double lower,
            Double futility,
            double difference,
            Double differenceLower,
            Double differenceUpper,
            Estimated lift,
            Outlook outlook,
            Adjusted adjusted,
            Clustering clustering,
            Verdict verdict,
            Verdict held,
            String reason) {

        /** A look at counts of units. */
        public Comparison(
                String variant,
                int look,
                double z,
                double information,
                double informationFraction,
                double spendingTime,
                double level,
                double alphaSpent,
                Double upper,
                Double lower,
                Double futility,
                double difference,
                Double differenceLower,
                Double differenceUpper,
                Estimated lift,
                Outlook outlook,
                Adjusted adjusted,
                Verdict verdict,
                Verdict held,
                String reason) {
            this(
                    variant,
                    look,
                    z,
                    information,
                    informationFraction,
                    spendingTime,
                    level,
                    alphaSpent,
                    upper,
                    lower,
                    futility,
                    difference,
                    differenceLower,
                    differenceUpper,
                    lift,
                    outlook,
                    adjusted,
                    null,
                    verdict,
                    held,
                    reason);
        }

        /** This look with the verdict as it is now: a held verdict may have been told since. */
        public Comparison standing(Verdict now, Verdict heldNow) {
            return new Comparison(
                    variant,
                    look,
                    z,
                    information,
                    informationFraction,
                    spendingTime,
                    level,
                    alphaSpent,
                    upper,
                    lower,
                    futility,
                    difference,
                    differenceLower,
                    differenceUpper,
                    lift,
                    outlook,
                    adjusted,
                    clustering,
                    now,
                    heldNow,
                    reason);
        }
    }
}
