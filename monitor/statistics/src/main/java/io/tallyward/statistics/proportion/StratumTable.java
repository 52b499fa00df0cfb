package io.tallyward.statistics.proportion;

import java.util.List;

/**
 * The two-by-two table of a stratum as doubles, in the letters of the textbooks.
 *
 * @param a successes of the variant
 * @param n1 trials of the variant
 * @param b successes of the control
 * @param n0 trials of the control
 * @param cross {@code a n0 - b n1}, rounded once
 */
record StratumTable(double a, double n1, double b, double n0, double cross) {

    /** The strata with trials in both arms; the others say nothing about a difference. */
    static List<StratumTable> informative(List<Stratum> strata) {
        return strata.stream()
                .filter(stratum -> stratum.trials() > 0 && stratum.controlTrials() > 0)
                .map(stratum -> new StratumTable(
                        stratum.successes(),
                        stratum.trials(),
                        stratum.controlSuccesses(),
                        stratum.controlTrials(),
                        StratifiedComparison.crossDifference(stratum)))
                .toList();
    }

    double all() {
        return n1 + n0;
    }

    double successes() {
        return a + b;
    }
}
