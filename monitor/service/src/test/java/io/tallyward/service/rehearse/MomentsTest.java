package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.Random;
import org.apache.commons.math3.stat.descriptive.DescriptiveStatistics;
import org.junit.jupiter.api.Test;

/** The oracle is the two-pass variance of Apache Commons Math 3.6.1. */
class MomentsTest {

    @Test
    void agreesWithTwoPassesHoweverTheStreamIsCut() {
        Random random = new Random(3);
        DescriptiveStatistics oracle = new DescriptiveStatistics();
        Moments sum = new Moments();
        Moments part = new Moments();
        for (int i = 0; i < 5_000; i++) {
            double value = 1e9 + random.nextGaussian();
            oracle.addValue(value);
            part.add(value);
            if (random.nextInt(100) == 0) {
                sum.add(part);
                part = new Moments();
            }
        }
        sum.add(part);
        sum.add(new Moments());
        Mean mean = sum.mean().orElseThrow();
        assertEquals(5_000, mean.count());
        // Values near 1e9 have a last bit of 1e-7.
        assertEquals(oracle.getMean(), mean.value(), 1e-6);
        assertEquals(oracle.getStandardDeviation() / Math.sqrt(5_000), mean.standardError(), 1e-7);
    }

    @Test
    void hasNoMeanOfNothingAndNoErrorOfOne() {
        Moments moments = new Moments();
        assertTrue(moments.mean().isEmpty());
        moments.add(4);
        assertEquals(new Mean(4, 0, 1), moments.mean().orElseThrow());
    }
}
