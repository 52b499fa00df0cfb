package io.tallyward.engine.decide;

import io.tallyward.engine.record.Clustering;
import io.tallyward.statistics.inference.LiftScale;
import io.tallyward.statistics.proportion.NormalError;
import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.ratio.RatioStratum;
import io.tallyward.statistics.ratio.StratifiedRatioComparison;
import java.util.List;
import java.util.Optional;

/** What the counts say about a challenger against the control, whatever a trial is. */
sealed interface Evidence {

    /** The statistic of variant minus control, standard normal without an effect. */
    double z();

    /** The difference of rates, stratified by epoch; in [-1, 1]. */
    double difference();

    /** One over the variance of the difference. */
    double information();

    /** Variance of the score, whose increments add up over epochs. */
    double scoreVariance();

    /** {@code sum n1 n0 / (n1 + n0)} over epochs, with n1 and n0 trials. */
    double weight();

    /** Skewness of the statistic without an effect, positive if the upper tail is the heavier one. */
    double skewness();

    /** What turns the difference into a lift. Empty while the control has no success. */
    Optional<LiftScale> liftScale();

    /** How the views of a unit depend on each other; empty where every unit is one trial. */
    Optional<Clustering> clustering();

    /**
     * Every trial is independent of the others.
     *
     * @param strata counts, one stratum per epoch
     * @param found their comparison
     */
    record Trials(List<Stratum> strata, StratifiedComparison found) implements Evidence {

        public Trials {
            strata = List.copyOf(strata);
        }

        /** Empty while there is no information. */
        static Optional<Evidence> of(List<Stratum> strata) {
            return StratifiedComparison.of(strata).map(found -> new Trials(strata, found));
        }

        @Override
        public double z() {
            return found.z();
        }

        @Override
        public double difference() {
            return found.difference();
        }

        @Override
        public double information() {
            return found.information();
        }

        @Override
        public double scoreVariance() {
            return found.scoreVariance();
        }

        @Override
        public double weight() {
            return Rates.weight(strata);
        }

        @Override
        public double skewness() {
            return NormalError.skewness(strata);
        }

        @Override
        public Optional<LiftScale> liftScale() {
            return Rates.of(strata).liftScale();
        }

        @Override
        public Optional<Clustering> clustering() {
            return Optional.empty();
        }
    }

    /**
     * Views of a unit are trials that depend on each other.
     *
     * @param strata counts of views, one stratum per epoch
     * @param found comparison with the variance between units
     * @param independent comparison as if views were independent
     */
    record Views(List<Stratum> strata, StratifiedRatioComparison found, StratifiedComparison independent)
            implements Evidence {

        public Views {
            strata = List.copyOf(strata);
        }

        /** Empty while there is no information; epochs without two units in each arm are left out. */
        static Optional<Evidence> of(List<RatioStratum> epochs) {
            List<RatioStratum> units = epochs.stream()
                    .filter(epoch ->
                            epoch.variant().units() > 1 && epoch.control().units() > 1)
                    .toList();
            List<Stratum> views = units.stream().map(Views::counts).toList();
            return StratifiedRatioComparison.of(units)
                    .flatMap(found ->
                            StratifiedComparison.of(views).map(independent -> new Views(views, found, independent)));
        }

        private static Stratum counts(RatioStratum epoch) {
            return new Stratum(
                    epoch.variant().numerator().longValueExact(),
                    epoch.variant().denominator().longValueExact(),
                    epoch.control().numerator().longValueExact(),
                    epoch.control().denominator().longValueExact());
        }

        @Override
        public double z() {
            return found.z();
        }

        @Override
        public double difference() {
            return StrictMath.max(-1, StrictMath.min(1, found.difference()));
        }

        @Override
        public double information() {
            return found.information();
        }

        @Override
        public double scoreVariance() {
            return found.scoreVariance();
        }

        @Override
        public double weight() {
            return Rates.weight(strata);
        }

        /**
         * That of as many independent views as carry the same information: their number divided by the design effect. Exact
         * for units whose views all end alike; a design effect below 1 is not relied upon.
         */
        @Override
        public double skewness() {
            return NormalError.skewness(strata) * StrictMath.sqrt(StrictMath.max(1, designEffect()));
        }

        @Override
        public Optional<LiftScale> liftScale() {
            return found.controlRatio() > 0
                    ? Optional.of(new LiftScale(found.controlRatio(), found.controlVariance(), found.variantVariance()))
                    : Optional.empty();
        }

        @Override
        public Optional<Clustering> clustering() {
            return Optional.of(new Clustering(independent.z(), designEffect()));
        }

        private double designEffect() {
            Rates rates = Rates.of(strata);
            double binomial = rates.variantVariance() + rates.controlVariance();
            return (found.variantVariance() + found.controlVariance()) / binomial;
        }
    }

    /**
     * The rates behind the stratified difference, weighted as it is, with binomial variances.
     *
     * @param control the control's rate
     * @param controlVariance its variance
     * @param variantVariance variance of the variant's rate
     */
    record Rates(double control, double controlVariance, double variantVariance) {

        static Rates of(List<Stratum> strata) {
            double weight = 0;
            double rate = 0;
            double controlVariance = 0;
            double variantVariance = 0;
            for (Stratum stratum : strata) {
                if (stratum.trials() == 0 || stratum.controlTrials() == 0) {
                    continue;
                }
                double n1 = stratum.trials();
                double n0 = stratum.controlTrials();
                double w = n1 * (n0 / (n1 + n0));
                double p1 = stratum.successes() / n1;
                double p0 = stratum.controlSuccesses() / n0;
                weight += w;
                rate += w * p0;
                variantVariance += w * w * p1 * (1 - p1) / n1;
                controlVariance += w * w * p0 * (1 - p0) / n0;
            }
            return new Rates(rate / weight, controlVariance / (weight * weight), variantVariance / (weight * weight));
        }

        static double weight(List<Stratum> strata) {
            double weight = 0;
            for (Stratum stratum : strata) {
                double own = stratum.trials();
                double others = stratum.controlTrials();
                weight += own + others > 0 ? own * (others / (own + others)) : 0;
            }
            return weight;
        }

        Optional<LiftScale> liftScale() {
            return control > 0 && variantVariance + controlVariance > 0
                    ? Optional.of(new LiftScale(control, controlVariance, variantVariance))
                    : Optional.empty();
        }
    }
}
