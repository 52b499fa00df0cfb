package io.tallyward.service.command;

import io.tallyward.statistics.boundary.ExitProbabilities;
import io.tallyward.statistics.boundary.ExitProfile;
import java.util.Arrays;

/**
 * How likely a path has stopped by each look, and why.
 *
 * @param benefit probability of having stopped for benefit by each look
 * @param harm probability of having stopped for harm by each look
 * @param futility probability of having stopped for futility by each look; zeros if futility is overruled
 * @param expectedInformation expected information fraction at the end of the path
 * @param expectedLooks expected number of looks
 */
record StopChances(
        double[] benefit, double[] harm, double[] futility, double expectedInformation, double expectedLooks) {

    /** A probability that nobody reads: an exit rarer than this is not told apart from none. */
    private static final double NEGLIGIBLE = 1e-13;

    /** Probability of stopping for benefit at any look. */
    double power() {
        return benefit[benefit.length - 1];
    }

    /** Boundaries of a plan, ready to be asked under several drifts. All z-values point towards the benefit. */
    static final class Walk {

        private final double[] information;
        private final double[] benefit;
        private final double[] harm;
        private final double[] futility;

        /**
         * A walk through the looks.
         *
         * @param information information fractions, ascending
         * @param benefit boundary for a benefit at each look; positive infinity for none
         * @param harm boundary for harm at each look; negative infinity for none
         * @param futility futility bound at each look; negative infinity for none
         */
        Walk(double[] information, double[] benefit, double[] harm, double[] futility) {
            this.information = information;
            this.benefit = benefit;
            this.harm = harm;
            this.futility = futility;
        }

        /** With every futility bound obeyed. */
        StopChances[] obeyed(double... drifts) {
            double[] lower = new double[harm.length];
            boolean futile = false;
            for (int k = 0; k < lower.length; k++) {
                lower[k] = Math.max(harm[k], futility[k]);
                futile |= futility[k] > harm[k];
            }
            return futile ? split(lower, drifts) : overruled(drifts);
        }

        /** With every futility bound overruled. */
        StopChances[] overruled(double... drifts) {
            double[] none = new double[harm.length];
            return Arrays.stream(drifts)
                    .mapToObj(drift -> ExitProbabilities.of(information, benefit, harm, drift))
                    .map(exits -> chances(exits, exits.lower(), none))
                    .toArray(StopChances[]::new);
        }

        /**
         * Where a look has a bound for harm below that for futility, a second walk up to it tells how much of the way down
         * ends in harm. Those who overrule futility meet harm more often, so where they hardly do, nobody does.
         */
        private StopChances[] split(double[] lower, double[] drifts) {
            int looks = lower.length;
            ExitProbabilities[] all = new ExitProbabilities[drifts.length];
            double[][] most = new double[drifts.length][];
            double[][] harmed = new double[drifts.length][looks];
            for (int d = 0; d < drifts.length; d++) {
                all[d] = ExitProbabilities.of(information, benefit, lower, drifts[d]);
                most[d] = ExitProbabilities.of(information, benefit, harm, drifts[d])
                        .lower();
            }
            double least = Arrays.stream(drifts).min().orElse(0);
            double greatest = Arrays.stream(drifts).max().orElse(0);
            for (int k = 0; k < looks; k++) {
                int look = k;
                if (harm[k] == lower[k]) {
                    for (int d = 0; d < drifts.length; d++) {
                        harmed[d][k] = all[d].lower()[k];
                    }
                } else if (Arrays.stream(most).anyMatch(chance -> chance[look] > NEGLIGIBLE)) {
                    ExitProfile profile = upTo(k, lower, least, greatest);
                    for (int d = 0; d < drifts.length; d++) {
                        harmed[d][k] = profile.at(drifts[d]).lower()[k];
                    }
                }
            }
            StopChances[] chances = new StopChances[drifts.length];
            for (int d = 0; d < drifts.length; d++) {
                double[] given = all[d].lower();
                for (int k = 0; k < looks; k++) {
                    given[k] = Math.max(0, given[k] - harmed[d][k]);
                }
                chances[d] = chances(all[d], harmed[d], given);
            }
            return chances;
        }

        private ExitProfile upTo(int k, double[] lower, double least, double greatest) {
            double[] ends = Arrays.copyOf(lower, k + 1);
            ends[k] = harm[k];
            return ExitProfile.of(
                    Arrays.copyOf(information, k + 1), Arrays.copyOf(benefit, k + 1), ends, least, greatest);
        }

        private static StopChances chances(ExitProbabilities exits, double[] harm, double[] futility) {
            double[] up = exits.upper();
            double[] down = exits.lower();
            double expected = 0;
            double running = 1;
            for (int k = 0; k < up.length; k++) {
                expected += running;
                running -= up[k] + down[k];
            }
            return new StopChances(
                    cumulated(up), cumulated(harm), cumulated(futility), exits.expectedInformation(), expected);
        }

        private static double[] cumulated(double[] terms) {
            double[] sums = terms.clone();
            for (int k = 1; k < sums.length; k++) {
                sums[k] += sums[k - 1];
            }
            return sums;
        }
    }
}
