package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import java.util.List;
import java.util.Map;
import java.util.function.BiConsumer;
import org.junit.jupiter.api.Test;

/** All of stratified.csv, among it R's UCBAdmissions, whose corrected chi-square R prints as 1.4269. */
class MantelHaenszelReferenceTest {

    /** Relative; fifteen digits are printed, and some dozens of roundings precede them. */
    private static final double ROUNDING = 5e-14;

    /** Absolute, for values that are 0 or nearly so. */
    private static final double NOTHING = 1e-15;

    /** Relative to p: what the tail makes of the rounding of chi-squares up to 90. */
    private static final double TAIL = 5e-12;

    private static final double CONFIDENCE = 0.95;

    @Test
    void testWithAndWithoutCorrection() {
        eachCase((row, strata) -> {
            MantelHaenszelTest found = MantelHaenszelTest.of(strata).orElseThrow();
            assertClose(row, "mh_z", found.z());
            assertClose(row, "mh_chi_square", found.chiSquare());
            assertClose(row, "mh_chi_square_corrected", found.correctedChiSquare());
            assertTail(row, "mh_p", found.statistic().pTwoSided());
            assertTail(row, "mh_p_corrected", found.correctedPTwoSided());
        });
    }

    @Test
    void commonOddsRatio() {
        eachCase((row, strata) -> {
            CommonOddsRatio found = CommonOddsRatio.of(strata).orElseThrow();
            assertClose(row, "mh_odds_ratio", found.value());
            assertClose(row, "var_log_or_rbg", found.logVariance().orElseThrow());
            Interval interval = found.interval(CONFIDENCE).orElseThrow();
            assertClose(row, "or_lower", interval.lower());
            assertClose(row, "or_upper", interval.upper());
        });
    }

    @Test
    void commonDifference() {
        eachCase((row, strata) -> {
            CommonRateDifference found = CommonRateDifference.of(strata).orElseThrow();
            assertClose(row, "mh_risk_difference", found.value());
            assertClose(row, "var_rd_sato", found.satoVariance());
            assertClose(row, "var_rd_greenland_robins", found.greenlandRobinsVariance());
            assertClose(row, "rd_sato_lower", found.satoInterval(CONFIDENCE).lower());
            assertClose(row, "rd_sato_upper", found.satoInterval(CONFIDENCE).upper());
        });
    }

    @Test
    void commonRatio() {
        eachCase((row, strata) -> {
            CommonRateRatio found = CommonRateRatio.of(strata).orElseThrow();
            assertClose(row, "mh_risk_ratio", found.value());
            assertClose(row, "var_log_rr", found.logVariance().orElseThrow());
        });
    }

    private static void eachCase(BiConsumer<Row, List<Stratum>> check) {
        Map<String, List<Row>> counts =
                ReferenceTable.read("stratified_counts.csv").by("case_id");
        ReferenceTable.read("stratified.csv")
                .rows()
                .forEach(row -> check.accept(
                        row,
                        counts.get(row.text("case_id")).stream()
                                .map(stratum -> new Stratum(
                                        stratum.count("x_treatment"),
                                        stratum.count("n_treatment"),
                                        stratum.count("x_control"),
                                        stratum.count("n_control")))
                                .toList()));
    }

    private static void assertClose(Row row, String column, double found) {
        double expected = row.number(column);
        assertEquals(expected, found, ROUNDING * Math.abs(expected) + NOTHING, row.text("case_id") + " " + column);
    }

    private static void assertTail(Row row, String column, double found) {
        double expected = row.number(column);
        assertEquals(expected, found, TAIL * expected, row.text("case_id") + " " + column);
    }
}
