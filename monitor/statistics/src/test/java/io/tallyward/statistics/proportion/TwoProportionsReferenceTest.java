package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import java.util.Optional;
import org.junit.jupiter.api.Test;

/** All of two_proportions.csv: counts from 1 to 1e11, among them those of Newcombe (1998), recalled from memory. */
class TwoProportionsReferenceTest {

    /** Relative to the value; fifteen digits are printed, and a dozen roundings precede it. */
    private static final double ROUNDING = 2e-14;

    /** Relative to the distance from the estimate: ends are sums, so their own digits say little about the method. */
    private static final double REACH = 1e-12;

    /** Absolute; half a unit of the fifteenth digit printed. */
    private static final double PRINTED = 5e-15;

    /** In p relative, for an error of 1e-15 in z that the tail multiplies by z^2. */
    private static final double TAIL = 1e-15;

    @Test
    void pooledStatisticAndItsProbabilities() {
        ReferenceTable.read("two_proportions.csv").rows().forEach(row -> {
            Optional<ZStatistic> found = ZStatistic.pooled(stratum(row));
            assertEquals(row.has("z_pooled"), found.isPresent(), where(row));
            found.ifPresent(statistic -> {
                double z = row.number("z_pooled");
                assertRelative(z, statistic.z(), row);
                assertTail(row, "p_one_sided_greater", statistic.pGreater());
                assertTail(row, "p_one_sided_less", statistic.pLess());
                assertTail(row, "p_two_sided", statistic.pTwoSided());
                double log = row.number("log10_p_two_sided");
                assertEquals(log, statistic.log10PTwoSided(), ROUNDING * Math.max(1, Math.abs(log)), where(row));
                double half = log - Math.log10(2);
                double smaller = z > 0 ? statistic.log10PGreater() : statistic.log10PLess();
                assertEquals(half, smaller, ROUNDING * Math.max(1, Math.abs(half)), where(row));
            });
        });
    }

    @Test
    void differenceWithItsUnpooledStandardError() {
        ReferenceTable.read("two_proportions.csv").rows().forEach(row -> {
            RateDifference found = RateDifference.of(stratum(row)).orElseThrow();
            assertRelative(row.number("risk_difference"), found.value(), row);
            assertRelative(row.number("se_unpooled"), found.standardError(), row);
            assertEquals(row.has("z_unpooled"), found.z().isPresent(), where(row));
            found.z().ifPresent(z -> assertRelative(row.number("z_unpooled"), z.z(), row));
            assertEnds(row, "wald", found.value(), found.wald(row.number("confidence")));
        });
    }

    @Test
    void wilsonIntervals() {
        ReferenceTable.read("two_proportions.csv").rows().forEach(row -> {
            Stratum counts = stratum(row);
            double confidence = row.number("confidence");
            assertEnds(
                    row,
                    "wilson_treatment",
                    (double) counts.successes() / counts.trials(),
                    ScoreInterval.wilson(counts.successes(), counts.trials(), confidence)
                            .orElseThrow());
            assertEnds(
                    row,
                    "wilson_control",
                    (double) counts.controlSuccesses() / counts.controlTrials(),
                    ScoreInterval.wilson(counts.controlSuccesses(), counts.controlTrials(), confidence)
                            .orElseThrow());
        });
    }

    @Test
    void newcombeIntervals() {
        ReferenceTable.read("two_proportions.csv")
                .rows()
                .forEach(row -> assertEnds(
                        row,
                        "newcombe",
                        row.number("risk_difference"),
                        ScoreInterval.newcombe(stratum(row), row.number("confidence"))
                                .orElseThrow()));
    }

    @Test
    void miettinenNurminenIntervals() {
        ReferenceTable.read("two_proportions.csv")
                .rows()
                .forEach(row -> assertEnds(
                        row,
                        "mn",
                        row.number("risk_difference"),
                        ScoreInterval.miettinenNurminen(stratum(row), row.number("confidence"))
                                .orElseThrow()));
    }

    @Test
    void ratioWithItsKatzInterval() {
        ReferenceTable.read("two_proportions.csv").rows().forEach(row -> {
            Optional<RateRatio> found = RateRatio.of(stratum(row));
            assertEquals(row.has("risk_ratio"), found.isPresent(), where(row));
            found.ifPresent(ratio -> {
                assertRelative(row.number("risk_ratio"), ratio.value(), row);
                Optional<Interval> interval = ratio.interval(row.number("confidence"));
                assertEquals(row.has("risk_ratio_lower"), interval.isPresent(), where(row));
                interval.ifPresent(ends -> {
                    assertRelative(
                            row.number("se_log_risk_ratio"),
                            ratio.logStandardError().orElseThrow(),
                            row);
                    assertRelative(row.number("risk_ratio_lower"), ends.lower(), row);
                    assertRelative(row.number("risk_ratio_upper"), ends.upper(), row);
                });
            });
        });
    }

    private static void assertEnds(Row row, String interval, double estimate, Interval found) {
        assertEnd(row, interval + "_lower", estimate, found.lower());
        assertEnd(row, interval + "_upper", estimate, found.upper());
    }

    private static void assertEnd(Row row, String column, double estimate, double found) {
        double expected = row.number(column);
        double tolerance = REACH * Math.abs(expected - estimate) + PRINTED * Math.abs(expected);
        assertEquals(expected, found, tolerance, where(row) + " " + column);
    }

    private static void assertTail(Row row, String column, double found) {
        double expected = row.number(column);
        double z = row.number("z_pooled");
        assertTrue(found >= 0 && found <= 1, where(row));
        assertEquals(expected, found, expected * (ROUNDING + TAIL * z * z), where(row) + " " + column);
    }

    private static void assertRelative(double expected, double found, Row row) {
        assertEquals(expected, found, ROUNDING * Math.abs(expected), where(row));
    }

    private static Stratum stratum(Row row) {
        return new Stratum(
                row.count("x_treatment"), row.count("n_treatment"), row.count("x_control"), row.count("n_control"));
    }

    private static String where(Row row) {
        return row.text("case_id") + " at " + row.text("confidence");
    }
}
