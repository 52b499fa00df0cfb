package io.tallyward.statistics.inference;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import java.util.List;
import java.util.stream.Stream;
import org.junit.jupiter.api.Test;

/** Drifts as differences of rates, and these as relative lifts. */
class EffectScaleTest {

    /** Relative; a handful of roundings. */
    private static final double ROUNDING = 1e-13;

    /** Relative; the half width of an interval printed with 15 digits keeps eight of them for the largest counts. */
    private static final double HALF_WIDTH = 1e-8;

    /** The naive drift of counts is their observed difference, whatever the plan; z and difference are the reference's. */
    @Test
    void givesTheNaiveDriftAsTheObservedDifference() {
        proportions().filter(row -> row.has("z_pooled")).forEach(row -> {
            Stratum counts = new Stratum(
                    row.count("x_treatment"), row.count("n_treatment"), row.count("x_control"), row.count("n_control"));
            double information =
                    StratifiedComparison.of(List.of(counts)).orElseThrow().information();
            Look look = new Look(1, 0.4, 0.01, 0.01, 2.3, -2.3);
            EffectScale scale = new EffectScale(information / look.information());
            double z = row.number("z_pooled");
            if (Math.abs(z) <= StagewiseInference.MOST_Z) {
                double naive = StagewiseInference.of(List.of(look), z).naiveDrift();
                double expected = row.number("risk_difference");
                assertEquals(expected, scale.riskDifference(naive), 1e-11 * Math.abs(expected), row.text("case_id"));
                assertEquals(naive, scale.drift(scale.riskDifference(naive)), ROUNDING * Math.abs(naive));
            }
        });
    }

    /** Katz's standard error of the log ratio, from the reference, times the ratio is that of the lift. */
    @Test
    void givesALiftThatHasTheStandardErrorOfKatz() {
        proportions()
                .filter(row -> row.has("se_log_risk_ratio") && row.number("se_log_risk_ratio") > 0)
                .forEach(row -> {
                    LiftScale scale = LiftScale.ofCounts(
                            row.count("x_control"),
                            row.count("n_control"),
                            row.count("x_treatment"),
                            row.count("n_treatment"));
                    double confidence = row.number("confidence");
                    Estimate lift = scale.lift(new Estimate(
                            row.number("risk_difference"),
                            new Interval(row.number("wald_lower"), row.number("wald_upper"), confidence)));
                    double ratio = row.number("risk_ratio");
                    double half =
                            Normal.upperQuantile(0.5 * (1 - confidence)) * ratio * row.number("se_log_risk_ratio");
                    String where = row.text("case_id");
                    assertEquals(ratio, 1 + lift.value(), 1e-12 * ratio, where);
                    double width = lift.interval().upper() - lift.interval().lower();
                    assertEquals(2 * half, width, HALF_WIDTH * 2 * half, where);
                    assertEquals(ratio - 1 + half, lift.interval().upper(), HALF_WIDTH * (ratio + half), where);
                });
    }

    @Test
    void leavesOpenEndsOpen() {
        Estimate drift = new Estimate(2, new Interval(0.1, Double.POSITIVE_INFINITY, 0.975));
        Estimate difference = new EffectScale(1e4).riskDifference(drift);
        assertEquals(0.02, difference.value());
        assertEquals(0.001, difference.interval().lower());
        assertEquals(Double.POSITIVE_INFINITY, difference.interval().upper());
        Estimate lift = new LiftScale(0.1, 1e-5, 1e-5).lift(difference);
        assertEquals(0.2, lift.value(), ROUNDING);
        assertEquals(Double.POSITIVE_INFINITY, lift.interval().upper());
        Estimate none = new LiftScale(0.1, 1e-5, 0).lift(new Estimate(-0.1, difference.interval()));
        assertEquals(Double.POSITIVE_INFINITY, none.interval().upper());
    }

    @Test
    void holdsItsEnds() {
        Interval interval = new Interval(-1, 2, 0.9);
        assertTrue(interval.contains(-1) && interval.contains(2) && !interval.contains(2.1));
    }

    @Test
    void refusesWhatIsNoScale() {
        Estimate estimate = new Estimate(2, new Interval(1, 3, 0.9));
        List<Runnable> refused = List.of(
                () -> new EffectScale(0),
                () -> new EffectScale(Double.NaN),
                () -> new EffectScale(1e4).riskDifference(Double.NaN),
                () -> new LiftScale(0, 1e-5, 1e-5),
                () -> new LiftScale(0.1, -1, 1e-5),
                () -> new LiftScale(0.1, 0, 0),
                () -> new LiftScale(0.1, 1e-5, 1e-5).lift(estimate),
                () -> LiftScale.ofCounts(0, 10, 1, 10),
                () -> LiftScale.ofCounts(1, 10, 11, 10),
                () -> LiftScale.ofCounts(1, 0, 1, 10),
                () -> new Interval(1, 0, 0.9),
                () -> new Interval(0, 1, 1),
                () -> new Interval(Double.NaN, 1, 0.9),
                () -> new Estimate(Double.NaN, estimate.interval()));
        refused.forEach(call -> assertThrows(IllegalArgumentException.class, call::run));
    }

    private static Stream<Row> proportions() {
        return ReferenceTable.read("two_proportions.csv").rows();
    }
}
