package io.tallyward.statistics.proportion;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.distribution.Normal;
import java.util.List;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.junit.jupiter.api.Test;

/** Against exact enumeration with Commons Math's binomial distribution. */
class NormalErrorTest {

    /** Moments by enumeration of a fixed pooled rate; the textbook third cumulant of a proportion is p q (1 - 2 p) / n^2. */
    @Test
    void isTheThirdCumulantOfTheDifference() {
        long n1 = 40;
        long n0 = 360;
        double p = 0.1;
        double third = 0;
        double variance = 0;
        BinomialDistribution own = new BinomialDistribution((int) n1, p);
        BinomialDistribution control = new BinomialDistribution((int) n0, p);
        for (int a = 0; a <= n1; a++) {
            for (int b = 0; b <= n0; b++) {
                double weight = own.probability(a) * control.probability(b);
                double difference = (double) a / n1 - (double) b / n0;
                variance += weight * difference * difference;
                third += weight * difference * difference * difference;
            }
        }
        double exact = third / Math.pow(variance, 1.5);
        assertEquals(exact, NormalError.skewness(List.of(new Stratum(4, n1, 36, n0))), 1e-12);
    }

    @Test
    void isNoneBetweenArmsOfOneSizeAndTurnsWithThem() {
        assertEquals(0, NormalError.skewness(List.of(new Stratum(3, 100, 9, 100))), 0);
        assertEquals(0, NormalError.skewness(List.of(new Stratum(30, 60, 10, 20))), 0, "one half");
        double small = NormalError.skewness(List.of(new Stratum(5, 50, 45, 450)));
        assertEquals(-small, NormalError.skewness(List.of(new Stratum(45, 450, 5, 50))), 1e-15);
        assertTrue(small > 0, "the small arm's upper tail is the heavy one");
        assertEquals(0, NormalError.skewness(List.of(new Stratum(0, 0, 5, 50), new Stratum(0, 9, 0, 9))), 0);
    }

    @Test
    void fallsAsOneOverTheRootOfTheSuccesses() {
        double few = NormalError.skewness(List.of(new Stratum(5, 5000, 45, 45000)));
        double many = NormalError.skewness(List.of(new Stratum(20, 20000, 180, 180000)));
        assertEquals(2, few / many, 1e-3);
        assertEquals(0.8 / Math.sqrt(0.1 * 0.9 * 50), few, 1e-3, "(s0 - s1) / sqrt(s1 s0 m) for rare successes");
    }

    /**
     * With rare successes the small arm has a binomial share of them. The sum of exact tails over the lattice is within a
     * fifth of what the term says it adds, for a share of a tenth and a hundred to a thousand successes.
     */
    @Test
    void saysHowMuchHeavierTheTailIs() {
        double boundary = 2.4;
        double share = 0.1;
        double nominal = Normal.survival(boundary);
        double added = 0;
        double predicted = 0;
        for (int m = 100; m < 1000; m++) {
            double least = m * share + boundary * Math.sqrt(m * share * (1 - share));
            added += 1 - new BinomialDistribution(m, share).cumulativeProbability((int) Math.ceil(least) - 1) - nominal;
            predicted += NormalError.tail((1 - 2 * share) / Math.sqrt(m * share * (1 - share)), boundary);
        }
        assertEquals(1, added / predicted, 0.2);
        assertTrue(predicted / 900 > 0.15 * nominal, "worth saying: " + predicted / 900 + " beside " + nominal);
    }

    @Test
    void refusesWhatIsNoNumber() {
        assertThrows(IllegalArgumentException.class, () -> NormalError.tail(Double.NaN, 2));
        assertThrows(IllegalArgumentException.class, () -> NormalError.tail(0.1, Double.NaN));
        assertThrows(IllegalArgumentException.class, () -> NormalError.tail(0.1, -1));
        assertEquals(0, NormalError.tail(0.1, Double.POSITIVE_INFINITY), 0);
    }
}
