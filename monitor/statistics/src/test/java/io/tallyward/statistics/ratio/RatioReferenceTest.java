package io.tallyward.statistics.ratio;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import java.util.List;
import org.junit.jupiter.api.Test;

/** All of ratio_metric.csv, from the users of ratio_metric_users.csv; `whale` has one user that outweighs the rest. */
class RatioReferenceTest {

    /** Relative; fifteen digits are printed, and a handful of roundings precede them. */
    private static final double ROUNDING = 1e-14;

    /** Relative to p: what the tail makes of the rounding of z up to 24. */
    private static final double TAIL = 1e-12;

    @Test
    void estimatesPerArm() {
        ReferenceTable.read("ratio_metric.csv").rows().forEach(row -> {
            for (String arm : List.of("treatment", "control")) {
                UnitSums sums = sums(row.text("case_id"), arm);
                assertEquals(row.count("users_" + arm), sums.units());
                assertEquals(row.count("clicks_" + arm), sums.numerator().longValueExact());
                assertEquals(row.count("views_" + arm), sums.denominator().longValueExact());
                RatioEstimate found = RatioEstimate.of(sums).orElseThrow();
                assertClose(row, "ratio_" + arm, found.ratio());
                assertClose(row, "var_ratio_" + arm, found.variance());
            }
        });
    }

    @Test
    void comparesArms() {
        ReferenceTable.read("ratio_metric.csv").rows().forEach(row -> {
            String id = row.text("case_id");
            RatioComparison found = RatioComparison.of(sums(id, "treatment"), sums(id, "control"))
                    .orElseThrow();
            assertClose(row, "difference", found.difference());
            assertClose(row, "se_difference", found.standardError());
            assertClose(row, "z", found.z().orElseThrow().z());
            double p = row.number("p_two_sided");
            assertEquals(p, found.z().orElseThrow().pTwoSided(), TAIL * p, id);
            RatioComparison.LogRatio log = found.logRatio().orElseThrow();
            assertClose(row, "log_ratio", log.value());
            assertClose(row, "se_log_ratio", log.standardError());
        });
    }

    private static UnitSums sums(String id, String arm) {
        return ReferenceTable.read("ratio_metric_users.csv")
                .rows()
                .filter(user ->
                        user.text("case_id").equals(id) && user.text("arm").equals(arm))
                .map(user -> UnitSums.ofUnit(user.count("views"), user.count("clicks")))
                .reduce(UnitSums.NONE, UnitSums::plus);
    }

    private static void assertClose(Row row, String column, double found) {
        double expected = row.number(column);
        assertEquals(expected, found, ROUNDING * Math.abs(expected), row.text("case_id") + " " + column);
    }
}
