package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable;
import io.tallyward.statistics.distribution.Normal;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** What the reference files leave open; they themselves are compared in {@link TwoProportionsReferenceTest}. */
class ZStatisticTest {

    private static final long SEED = 1978;

    /** Absolute; the logarithm of a printed ratio keeps 1e-15, over a standard error of 1e-6 or more. */
    private static final double PRINTED = 1e-8;

    @Test
    void comparesRatesByTheirRatioAsTheReferencePrintsIt() {
        ReferenceTable.read("two_proportions.csv").rows().forEach(row -> {
            Stratum counts = new Stratum(
                    row.count("x_treatment"), row.count("n_treatment"), row.count("x_control"), row.count("n_control"));
            boolean defined = row.has("se_log_risk_ratio") && row.number("se_log_risk_ratio") > 0;
            assertEquals(defined, ZStatistic.ratio(counts).isPresent(), row.text("case_id"));
            if (defined) {
                double expected = Math.log(row.number("risk_ratio")) / row.number("se_log_risk_ratio");
                double found = ZStatistic.ratio(counts).orElseThrow().z();
                assertEquals(expected, found, PRINTED * (1 + Math.abs(expected)), row.text("case_id"));
            }
        });
    }

    /** The interval and the test by the ratio agree: 1 is an end exactly where z is the interval's reach. */
    @Test
    void ratioAgreesWithItsInterval() {
        Random random = new Random(SEED);
        for (int run = 0; run < 500; run++) {
            Stratum counts = anyCounts(random);
            double z = ZStatistic.ratio(counts).orElseThrow().z();
            if (Math.abs(z) > 1e-6 && Math.abs(z) < 6) {
                double confidence = 1 - 2 * Normal.survival(Math.abs(z));
                Interval interval =
                        RateRatio.of(counts).orElseThrow().interval(confidence).orElseThrow();
                assertEquals(1, z > 0 ? interval.lower() : interval.upper(), 1e-6, "seed " + SEED + ", run " + run);
            }
        }
    }

    /** Three ways to ask the same question agree to first order where the rates are close. */
    @Test
    void allThreeAgreeForCloseRates() {
        Stratum close = new Stratum(100_400, 1_000_000, 50_000, 500_000);
        double pooled = ZStatistic.pooled(close).orElseThrow().z();
        assertEquals(pooled, ZStatistic.unpooled(close).orElseThrow().z(), 1e-3);
        assertEquals(pooled, ZStatistic.ratio(close).orElseThrow().z(), 2e-3);
    }

    @Test
    void unpooledIsNeverNearerToNothingWithEqualArms() {
        Random random = new Random(SEED + 1);
        for (int run = 0; run < 500; run++) {
            long n = 2 + random.nextInt(300);
            Stratum counts = new Stratum(1 + random.nextInt((int) n - 1), n, 1 + random.nextInt((int) n - 1), n);
            double pooled = ZStatistic.pooled(counts).orElseThrow().z();
            double unpooled = ZStatistic.unpooled(counts).orElseThrow().z();
            assertTrue(Math.abs(unpooled) >= Math.abs(pooled) * (1 - 1e-14), "seed " + (SEED + 1) + ", " + counts);
        }
    }

    @Test
    void isEmptyWhereThereIsNothingToDivideBy() {
        assertTrue(ZStatistic.unpooled(new Stratum(5, 5, 0, 7)).isEmpty());
        assertTrue(ZStatistic.unpooled(new Stratum(0, 0, 1, 7)).isEmpty());
        assertTrue(ZStatistic.ratio(new Stratum(0, 5, 1, 7)).isEmpty());
        assertTrue(ZStatistic.ratio(new Stratum(1, 5, 0, 7)).isEmpty());
        assertTrue(ZStatistic.ratio(new Stratum(5, 5, 7, 7)).isEmpty());
        assertThrows(IllegalArgumentException.class, () -> new ZStatistic(Double.NaN));
    }

    private static Stratum anyCounts(Random random) {
        long n1 = 10 + random.nextInt(1000);
        long n0 = 10 + random.nextInt(1000);
        return new Stratum(1 + random.nextInt((int) n1 - 1), n1, 1 + random.nextInt((int) n0 - 1), n0);
    }
}
