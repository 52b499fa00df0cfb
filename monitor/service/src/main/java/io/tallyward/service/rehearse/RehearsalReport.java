package io.tallyward.service.rehearse;

import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/**
 * What many rehearsed runs of one plan say about it. Benefit and harm count a run if any challenger ended so; the two may
 * meet in one run. Rejection is either. Every other run is withheld if a challenger ended so, else futile if all did, else
 * exhausted: rejection, futility, exhaustion and withholding add up to 1.
 *
 * @param step the counts were considered at the end of every such stretch
 * @param steps how many of them a full run has
 * @param arrivals units that arrive in a full run, all variants
 * @param rejection runs in which a verdict of benefit or harm was told
 * @param benefit runs with a verdict of benefit
 * @param harm runs with a verdict of harm
 * @param futility runs without rejection in which every challenger was given up
 * @param exhausted other runs that used up what was planned
 * @param withheld runs without rejection in which a verdict could not be told for lack of trust in the data
 * @param mismatch runs with an alarm of the split check; all of them false, as the simulated split is the planned one
 * @param naivePeeking runs in which an uncorrected test, read at the same looks, would have rejected at one of them
 * @param looks looks until the last verdict was told
 * @param trials trials until then, all variants
 * @param days days until then
 * @param arms one entry per challenger, in the plan's order
 * @param falseAlarm runs with a verdict of benefit or harm on a challenger without a true difference; empty if each has one
 * @param waited looks that were due and had to wait for more data
 */
public record RehearsalReport(
        Duration step,
        int steps,
        long arrivals,
        Rate rejection,
        Rate benefit,
        Rate harm,
        Rate futility,
        Rate exhausted,
        Rate withheld,
        Rate mismatch,
        Rate naivePeeking,
        Mean looks,
        Mean trials,
        Mean days,
        List<Arm> arms,
        Optional<Rate> falseAlarm,
        Mean waited) {

    public RehearsalReport {
        arms = List.copyOf(arms);
    }

    /**
     * What became of one challenger.
     *
     * @param variant its name
     * @param trueDifference true rate of the challenger minus that of the control
     * @param rejection runs in which it ended with benefit or harm
     * @param endings runs by ending; every ending has its entry
     * @param naivePeeking runs in which an uncorrected test would have rejected at one of the looks at it
     * @param looks looks taken at it
     * @param stops number of runs by the look it ended at, ascending, and ending; look 0 stands for none
     * @param estimates what was estimated at the look that ended it; empty when left out or when no run had one; runs that
     *     were given up as futile have none
     */
    public record Arm(
            String variant,
            double trueDifference,
            Rate rejection,
            Map<Ending, Rate> endings,
            Rate naivePeeking,
            Mean looks,
            List<Stop> stops,
            Optional<Estimates> estimates) {

        public Arm {
            endings = Map.copyOf(endings);
            stops = List.copyOf(stops);
        }
    }

    /** In how many runs a challenger ended at a look, by ending; every ending has its entry. */
    public record Stop(int look, Map<Ending, Long> runs) {

        public Stop {
            runs = Map.copyOf(runs);
        }

        /** All runs that ended there. */
        public long total() {
            return runs.values().stream().mapToLong(Long::longValue).sum();
        }
    }

    /**
     * How good the estimates at the look that ended a comparison were, over the runs that had one.
     *
     * @param naiveBias mean of the observed difference less the true one
     * @param adjustedBias the same for the median-unbiased estimate
     * @param naiveTooLow share of runs whose observed difference was below the true one
     * @param adjustedTooLow the same for the median-unbiased estimate; one half is right
     * @param naiveCoverage share of runs whose naive interval held the truth
     * @param repeatedCoverage share of runs whose repeated confidence interval did
     * @param stagewiseCoverage share of runs whose stage-wise interval did
     * @param level what the naive and the stage-wise interval promise; the mean over runs, as it falls where other challengers
     *     pass their level on
     */
    public record Estimates(
            Mean naiveBias,
            Mean adjustedBias,
            Rate naiveTooLow,
            Rate adjustedTooLow,
            Rate naiveCoverage,
            Rate repeatedCoverage,
            Rate stagewiseCoverage,
            double level) {}
}
