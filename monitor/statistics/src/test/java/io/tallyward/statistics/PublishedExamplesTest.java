package io.tallyward.statistics;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.boundary.ClassicalConstants;
import io.tallyward.statistics.boundary.ExitProbabilities;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.multiplicity.AdjustedProbability;
import io.tallyward.statistics.multiplicity.AlphaGraph;
import io.tallyward.statistics.proportion.CommonOddsRatio;
import io.tallyward.statistics.proportion.Interval;
import io.tallyward.statistics.proportion.MantelHaenszelTest;
import io.tallyward.statistics.proportion.RateDifference;
import io.tallyward.statistics.proportion.RateRatio;
import io.tallyward.statistics.proportion.ScoreInterval;
import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.proportion.ZStatistic;
import io.tallyward.statistics.spending.SpendingFunction;
import io.tallyward.statistics.split.PearsonSplit;
import java.util.Arrays;
import java.util.List;
import java.util.Map;
import java.util.Set;
import org.junit.jupiter.api.Test;

/**
 * Numbers from the literature, each with its source. All were recalled from memory, not looked up, unless they
 * are said to be worked by hand; tolerances are half a unit of the last digit printed. Those that the reference files carry (the heart attack trial, Armitage and others, Dunnett, the
 * textbook O'Brien-Fleming boundaries) are checked there.
 */
class PublishedExamplesTest {

    private static final double[] POCOCK_05 = {
        1.960, 2.178, 2.289, 2.361, 2.413, 2.453, 2.485, 2.512, 2.535, 2.555, 2.572, 2.588
    };
    private static final double[] POCOCK_01 = {2.576, 2.772, 2.873, 2.939, 2.986, 3.023, 3.053, 3.078, 3.099, 3.117};
    private static final double[] POCOCK_10 = {1.645, 1.875, 1.992, 2.067, 2.122, 2.164, 2.197, 2.225, 2.249, 2.270};
    private static final double[] FALLING_05 = {
        1.960, 1.977, 2.004, 2.024, 2.040, 2.053, 2.063, 2.072, 2.080, 2.087, 2.092, 2.098
    };
    private static final double[] FALLING_01 = {2.576, 2.580, 2.595, 2.609, 2.621, 2.631, 2.640, 2.648, 2.654, 2.660};
    private static final double[] FALLING_10 = {1.645, 1.678, 1.710, 1.733, 1.751, 1.765, 1.776, 1.786, 1.794, 1.801};

    /** Jennison and Turnbull, "Group Sequential Methods", 2000, tables 2.1 and 2.3, two-sided. */
    @Test
    void constantsOfTheClassicalTests() {
        assertTable(ClassicalConstants.POCOCK, 0.05, POCOCK_05);
        assertTable(ClassicalConstants.POCOCK, 0.01, POCOCK_01);
        assertTable(ClassicalConstants.POCOCK, 0.10, POCOCK_10);
        assertTable(ClassicalConstants.OBRIEN_FLEMING, 0.05, FALLING_05);
        assertTable(ClassicalConstants.OBRIEN_FLEMING, 0.01, FALLING_01);
        assertTable(ClassicalConstants.OBRIEN_FLEMING, 0.10, FALLING_10);
        assertEquals(2.626, ClassicalConstants.POCOCK.constant(15, 0.05), 5e-4);
        assertEquals(2.672, ClassicalConstants.POCOCK.constant(20, 0.05), 5e-4);
        assertEquals(2.110, ClassicalConstants.OBRIEN_FLEMING.constant(15, 0.05), 5e-4);
        assertEquals(2.126, ClassicalConstants.OBRIEN_FLEMING.constant(20, 0.05), 5e-4);
    }

    private static void assertTable(ClassicalConstants test, double alpha, double[] published) {
        for (int looks = 1; looks <= published.length; looks++) {
            double found = test.constant(looks, alpha);
            assertEquals(published[looks - 1], found, 5e-4, test + ", " + looks + " looks at " + alpha);
        }
    }

    /** Pocock (1977), table 1: nominal level of each of K tests at 0.05 overall; four decimals. */
    @Test
    void nominalLevelsOfPocock() {
        double[] published = {0.05, 0.0294, 0.0221, 0.0182, 0.0158};
        for (int looks = 1; looks <= published.length; looks++) {
            double nominal = 2 * Normal.survival(ClassicalConstants.POCOCK.constant(looks, 0.05));
            assertEquals(published[looks - 1], nominal, 5e-5, looks + " looks");
        }
    }

    /** O'Brien and Fleming (1979) as every textbook prints it for five looks, two-sided 0.05. */
    @Test
    void boundariesOfObrienAndFleming() {
        double[] published = {4.56, 3.23, 2.63, 2.28, 2.04};
        double[] found = ClassicalConstants.OBRIEN_FLEMING.boundaries(5, 0.05);
        for (int k = 0; k < 5; k++) {
            assertEquals(published[k], found[k], 5e-3, "look " + (k + 1));
        }
    }

    /** Armitage, McPherson and Rowe (1969), table 2: a test at 0.05 read again and again. */
    @Test
    void errorOfNaivePeeking() {
        Map<Integer, Double> published =
                Map.of(1, 0.050, 2, 0.083, 3, 0.107, 4, 0.126, 5, 0.142, 10, 0.193, 20, 0.248, 50, 0.320);
        published.forEach((looks, error) -> {
            double[] t = new double[looks];
            Arrays.setAll(t, k -> (k + 1.0) / looks);
            double[] upper = new double[looks];
            Arrays.fill(upper, Normal.upperQuantile(0.025));
            double[] lower = Arrays.stream(upper).map(z -> -z).toArray();
            ExitProbabilities exits = ExitProbabilities.of(t, upper, lower, 0);
            assertEquals(error, exits.totalUpper() + exits.totalLower(), 5e-4, looks + " looks");
        });
    }

    /**
     * Lan and DeMets (1983): their first spending function at one-sided 0.025 and five equal steps, as reprinted in textbooks
     * for two-sided 0.05 with half of it in each tail; and the second.
     */
    @Test
    void spendingOfLanAndDeMets() {
        double[] late = {0.0000, 0.0004, 0.0038, 0.0122, 0.0250};
        double[] early = {0.0074, 0.0131, 0.0177, 0.0216, 0.0250};
        for (int k = 1; k <= 5; k++) {
            assertEquals(late[k - 1], SpendingFunction.obrienFlemingType().spent(0.025, k / 5.0), 5e-5, "late " + k);
            assertEquals(early[k - 1], SpendingFunction.pocockType().spent(0.025, k / 5.0), 5e-5, "early " + k);
        }
    }

    /** Newcombe (1998), table 2: 56 of 70 against 48 of 80, methods 5 (Miettinen and Nurminen) and 10 (his own); and (b), (c). */
    @Test
    void intervalsOfNewcombe() {
        Stratum first = new Stratum(56, 70, 48, 80);
        assertEnds(0.0524, 0.3339, ScoreInterval.newcombe(first, 0.95).orElseThrow(), 5e-5);
        assertEnds(0.0528, 0.3382, ScoreInterval.miettinenNurminen(first, 0.95).orElseThrow(), 5e-5);
        assertEnds(0.0575, 0.3425, RateDifference.of(first).orElseThrow().wald(0.95), 5e-5);
        Stratum second = new Stratum(9, 10, 3, 10);
        assertEnds(0.1705, 0.8090, ScoreInterval.newcombe(second, 0.95).orElseThrow(), 5e-5);
        assertEnds(0.1700, 0.8406, ScoreInterval.miettinenNurminen(second, 0.95).orElseThrow(), 5e-5);
    }

    /** Newcombe, Statistics in Medicine 17 (1998) 857-872, table I: the score interval of 81 of 263, 15 of 148, 0 of 20, 1 of 29. */
    @Test
    void intervalsOfWilson() {
        assertEnds(0.2553, 0.3662, ScoreInterval.wilson(81, 263, 0.95).orElseThrow(), 5e-5);
        assertEnds(0.0624, 0.1605, ScoreInterval.wilson(15, 148, 0.95).orElseThrow(), 5e-5);
        assertEnds(0.0000, 0.1611, ScoreInterval.wilson(0, 20, 0.95).orElseThrow(), 5e-5);
        assertEnds(0.0061, 0.1718, ScoreInterval.wilson(1, 29, 0.95).orElseThrow(), 5e-5);
    }

    /**
     * The Physicians' Health Study as Agresti works it, "Categorical Data Analysis", section on two-by-two tables: aspirin 104 of
     * 11,037, placebo 189 of 11,034; placebo over aspirin 1.82 with interval 1.43 to 2.30, difference 0.0077 with 0.005 to
     * 0.011.
     */
    @Test
    void heartAttacksUnderAspirin() {
        Stratum placebo = new Stratum(189, 11_034, 104, 11_037);
        RateRatio ratio = RateRatio.of(placebo).orElseThrow();
        assertEquals(1.82, ratio.value(), 5e-3);
        assertEnds(1.43, 2.30, ratio.interval(0.95).orElseThrow(), 1e-2);
        RateDifference difference = RateDifference.of(placebo).orElseThrow();
        assertEquals(0.0077, difference.value(), 5e-5);
        assertEnds(0.005, 0.011, difference.wald(0.95), 5e-4);
        assertEquals(5.00, ZStatistic.pooled(placebo).orElseThrow().z(), 5e-3);
        double byRatio = Math.log(ratio.value()) / ratio.logStandardError().orElseThrow();
        assertEquals(byRatio, ZStatistic.ratio(placebo).orElseThrow().z(), 1e-12);
    }

    /**
     * Berkeley admissions 1973 as R's data set UCBAdmissions has them, men against women over departments A to F: R prints
     * 1.4269 with correction (1.5246 without) and the common odds ratio 0.9047.
     */
    @Test
    void admissionsAtBerkeley() {
        List<Stratum> departments = List.of(
                new Stratum(512, 825, 89, 108),
                new Stratum(353, 560, 17, 25),
                new Stratum(120, 325, 202, 593),
                new Stratum(138, 417, 131, 375),
                new Stratum(53, 191, 94, 393),
                new Stratum(22, 373, 24, 341));
        MantelHaenszelTest test = MantelHaenszelTest.of(departments).orElseThrow();
        assertEquals(1.4269, test.correctedChiSquare(), 5e-5);
        assertEquals(1.5246, test.chiSquare(), 5e-5);
        assertEquals(0.9047, CommonOddsRatio.of(departments).orElseThrow().value(), 5e-5);
        // the crude rates, 45 against 30 percent, say the opposite (Bickel, Hammel and O'Connell 1975)
        Stratum crude = new Stratum(1198, 2691, 557, 1835);
        assertTrue(ZStatistic.pooled(crude).orElseThrow().z() > 9);
        assertTrue(StratifiedComparison.of(departments).orElseThrow().z() < 0);
    }

    /** Mendel (1866), seven crosses expected at 3 to 1; chi-squares as printed by Fisher (1936) and since. */
    @Test
    void peasOfMendel() {
        long[][] counts = {{5474, 1850}, {6022, 2001}, {705, 224}, {882, 299}, {428, 152}, {651, 207}, {787, 277}};
        double[] published = {0.263, 0.015, 0.391, 0.064, 0.451, 0.350, 0.607};
        PearsonSplit all = PearsonSplit.NONE;
        for (int i = 0; i < counts.length; i++) {
            PearsonSplit cross = PearsonSplit.of(new double[] {3, 1}, counts[i]);
            assertEquals(published[i], cross.chiSquare(), 5e-4, "cross " + i);
            all = all.plus(cross);
        }
        assertEquals(7, all.degreesOfFreedom());
        assertEquals(2.14, all.chiSquare(), 5e-3);
        // round yellow, round green, wrinkled yellow, wrinkled green: 9 to 3 to 3 to 1
        PearsonSplit two = PearsonSplit.of(new double[] {9, 3, 3, 1}, new long[] {315, 108, 101, 32});
        assertEquals(0.470, two.chiSquare(), 5e-4);
        assertEquals(3, two.degreesOfFreedom());
    }

    /** Holm (1979) worked by hand: 4 times 0.005, 3 times 0.01, 2 times 0.03, and 0.04, which must not be less than the one before. */
    @Test
    void adjustmentOfHolm() {
        double[] found = AdjustedProbability.HOLM.of(0.01, 0.04, 0.03, 0.005);
        double[] worked = {0.03, 0.06, 0.06, 0.02};
        for (int i = 0; i < worked.length; i++) {
            assertEquals(worked[i], found[i], 1e-15, "hypothesis " + (i + 1));
        }
    }

    /**
     * Bretz, Maurer, Brannath and Posch (2009), their graph for two primary and two secondary hypotheses
     * (parallel gatekeeping): each primary passes half to each secondary, each secondary all to the other. The p-values are our
     * own and the levels worked by hand.
     */
    @Test
    void graphOfBretzAndOthers() {
        AlphaGraph gates = new AlphaGraph(
                List.of(0.5, 0.5, 0.0, 0.0),
                List.of(
                        List.of(0.0, 0.0, 0.5, 0.5),
                        List.of(0.0, 0.0, 0.5, 0.5),
                        List.of(0.0, 0.0, 0.0, 1.0),
                        List.of(0.0, 0.0, 1.0, 0.0)));
        // by hand: 2 at 0.025, then 3 and 4 at 0.0125 each; 4 falls, 3 has 0.025 and stays, as does 1 at 0.025
        assertEquals(Set.of(1, 3), gates.rejections(0.05, 0.04, 0.01, 0.03, 0.005));
        assertEquals(0.025, gates.levels(0.05, Set.of(1, 3)).get(2), 1e-15);
        // both primaries fall: 3 has 0.025, with 4 fallen too it has all
        assertEquals(0.025, gates.levels(0.05, Set.of(0, 1)).get(2), 1e-15);
        assertEquals(0.05, gates.levels(0.05, Set.of(0, 1, 3)).get(2), 1e-15);
    }

    private static void assertEnds(double lower, double upper, Interval found, double printed) {
        assertEquals(lower, found.lower(), printed, found.toString());
        assertEquals(upper, found.upper(), printed, found.toString());
    }
}
