package io.tallyward.statistics.inference;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.boundary.Look;
import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;

/** Against an independent recursion on another scale; see the README beside the reference files. */
class StagewiseInferenceReferenceTest {

    /** Absolute; the reference is trusted to 1e-12. */
    private static final double PROBABILITY = 2e-12;

    /** Absolute; drifts are printed with 13 digits, 1e-12 of those around 10, and solved to 1e-12 standard errors. */
    private static final double DRIFT = 2e-11;

    /** Relative; closed forms of numbers printed with 13 digits. */
    private static final double PRINTED = 1e-12;

    @Test
    void agreesWithIndependentRecursions() {
        ReferenceTable.read("after_stopping.csv").rows().forEach(row -> {
            List<Look> looks = looks(row);
            boolean twoSided = row.text("side").equals("two");
            StagewiseInference stop = StagewiseInference.of(looks, row.number("observed_z"));
            String where = row.text("case_id");
            assertEquals(row.number("p_upper"), stop.pUpper(), PROBABILITY, where);
            assertEquals(row.number("p_lower"), stop.pLower(), PROBABILITY, where);
            assertEquals(row.number("p_reported"), stop.pReported(twoSided), PROBABILITY, where);
            assertEquals(row.number("naive_theta"), stop.naiveDrift(), relative(row, "naive_theta"), where);
            Estimate estimate = stop.estimate(row.number("ci_level"));
            assertEquals(row.number("median_unbiased_theta"), estimate.value(), DRIFT, where);
            assertEquals(row.number("ci_lower"), estimate.interval().lower(), DRIFT, where);
            assertEquals(row.number("ci_upper"), estimate.interval().upper(), DRIFT, where);
            assertEquals(row.number("ci_level"), estimate.interval().level(), where);
        });
    }

    @Test
    void givesTheRepeatedIntervalOfTheLook() {
        ReferenceTable.read("after_stopping.csv").rows().forEach(row -> {
            List<Look> looks = looks(row);
            Look last = looks.get(looks.size() - 1);
            Interval interval = RepeatedInterval.at(last, row.number("observed_z"), row.number("rci_level"));
            String where = row.text("case_id");
            // The difference of z and boundary may cancel, so the tolerance is that of the terms.
            double tolerance = PRINTED * (1 + Math.abs(row.number("naive_theta")));
            assertEquals(row.number("rci_lower"), interval.lower(), tolerance, where);
            assertEquals(row.number("rci_upper"), interval.upper(), tolerance, where);
        });
    }

    /** One look, z = 2.5: the textbook two-sided p-value 0.0124 and interval 2.5 -/+ 1.96. */
    @Test
    void reducesToTheUsualIntervalForASingleLook() {
        StagewiseInference stop = StagewiseInference.of(List.of(new Look(1, 1, 0.025, 0.025, 1.96, -1.96)), 2.5);
        assertEquals(0.0124, stop.pReported(true), 5e-5);
        assertEquals(0.54, stop.interval(0.95).lower(), 5e-5);
        assertEquals(4.46, stop.interval(0.95).upper(), 5e-5);
        assertEquals(2.5, stop.medianUnbiasedDrift());
    }

    private static double relative(Row row, String column) {
        return PRINTED * Math.abs(row.number(column));
    }

    /** The looks up to the stop; what they have spent plays no part here. */
    private static List<Look> looks(Row row) {
        double[] t = row.numbers("information_fractions");
        double[] upper = row.numbers("z_boundaries");
        boolean twoSided = row.text("side").equals("two");
        List<Look> looks = new ArrayList<>();
        for (int k = 0; k < row.count("stop_look"); k++) {
            double lower = twoSided ? -upper[k] : Double.NEGATIVE_INFINITY;
            looks.add(new Look(k + 1, t[k], 0, 0, upper[k], lower));
        }
        return looks;
    }
}
