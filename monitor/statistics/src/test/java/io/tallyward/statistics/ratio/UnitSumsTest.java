package io.tallyward.statistics.ratio;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.math.BigDecimal;
import java.math.BigInteger;
import java.math.MathContext;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.Collections;
import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.Test;

class UnitSumsTest {

    private static final long SEED = 1977;
    private static final long MOST = 1L << 53;

    /** Relative; a handful of roundings. */
    private static final double ROUNDING = 1e-14;

    @Test
    void addsUpToTheSameInAnyOrderAndPartition() {
        Random random = new Random(SEED);
        List<UnitSums> units = new ArrayList<>();
        for (int i = 0; i < 1000; i++) {
            long bound = 1L << random.nextInt(54);
            units.add(UnitSums.ofUnit(
                    (long) (random.nextDouble() * bound), (long) ((random.nextDouble() - 0.3) * bound)));
        }
        UnitSums all = units.stream().reduce(UnitSums.NONE, UnitSums::plus);
        for (int run = 0; run < 20; run++) {
            Collections.shuffle(units, random);
            UnitSums[] partitions = new UnitSums[1 + random.nextInt(16)];
            Arrays.fill(partitions, UnitSums.NONE);
            for (UnitSums unit : units) {
                int partition = random.nextInt(partitions.length);
                partitions[partition] = partitions[partition].plus(unit);
            }
            UnitSums merged = Arrays.stream(partitions).reduce(UnitSums.NONE, UnitSums::plus);
            assertEquals(all, merged, "seed " + SEED + ", run " + run);
            assertEquals(RatioEstimate.of(all), RatioEstimate.of(merged), "seed " + SEED + ", run " + run);
        }
    }

    @Test
    void takesAUnitOutWithoutTrace() {
        UnitSums rest = UnitSums.ofUnit(3, 1).plus(UnitSums.ofUnit(5, 0));
        UnitSums whale = UnitSums.ofUnit(MOST, MOST - 1);
        assertEquals(rest, rest.plus(whale).minus(whale));
        assertEquals(UnitSums.NONE, whale.minus(whale));
        assertThrows(IllegalArgumentException.class, () -> rest.minus(whale));
    }

    /** The definition, unit by unit, in decimal arithmetic with eighty digits. */
    @Test
    void varianceIsThatOfTheDefinitionEvenBesideAWhale() {
        Random random = new Random(SEED);
        for (int run = 0; run < 100; run++) {
            long[][] units = new long[20][];
            UnitSums sums = UnitSums.NONE;
            for (int i = 0; i < units.length; i++) {
                units[i] = new long[] {1 + random.nextInt(9), random.nextInt(3)};
            }
            units[0] = new long[] {MOST - random.nextInt(1000), MOST / 5 + random.nextInt(1000)};
            for (long[] unit : units) {
                sums = sums.plus(UnitSums.ofUnit(unit[0], unit[1]));
            }
            double found = RatioEstimate.of(sums).orElseThrow().variance();
            double expected = definition(units);
            assertEquals(expected, found, ROUNDING * expected, "seed " + SEED + ", run " + run);
        }
    }

    @Test
    void estimatesNothingWithoutTwoUnitsAndADenominator() {
        assertTrue(RatioEstimate.of(UnitSums.NONE).isEmpty());
        assertTrue(RatioEstimate.of(UnitSums.ofUnit(5, 2)).isEmpty());
        UnitSums noViews = UnitSums.ofUnit(0, 0).plus(UnitSums.ofUnit(0, 0));
        assertTrue(RatioEstimate.of(noViews).isEmpty());
        UnitSums some = UnitSums.ofUnit(3, 1).plus(UnitSums.ofUnit(5, 0));
        assertTrue(RatioComparison.of(some, noViews).isEmpty());
        UnitSums noClicks = UnitSums.ofUnit(3, 0).plus(UnitSums.ofUnit(5, 0));
        assertTrue(RatioComparison.of(some, noClicks).orElseThrow().logRatio().isEmpty());
        assertTrue(RatioComparison.of(noClicks, noClicks).orElseThrow().z().isEmpty());
    }

    @Test
    void oneViewPerUnitIsAProportion() {
        UnitSums sums = UnitSums.NONE;
        for (int i = 0; i < 50; i++) {
            sums = sums.plus(UnitSums.ofUnit(1, i < 20 ? 1 : 0));
        }
        RatioEstimate found = RatioEstimate.of(sums).orElseThrow();
        assertEquals(0.4, found.ratio(), ROUNDING);
        assertEquals(0.4 * 0.6 / 49, found.variance(), ROUNDING);
    }

    @Test
    void refusesSumsThatNoUnitsHave() {
        BigInteger one = BigInteger.ONE;
        BigInteger two = BigInteger.TWO;
        BigInteger zero = BigInteger.ZERO;
        assertThrows(IllegalArgumentException.class, () -> new UnitSums(-1, zero, zero, zero, zero, zero));
        assertThrows(IllegalArgumentException.class, () -> new UnitSums(0, one, zero, zero, zero, zero));
        assertThrows(IllegalArgumentException.class, () -> new UnitSums(0, zero, zero, zero, one, zero));
        assertThrows(IllegalArgumentException.class, () -> new UnitSums(1, two, zero, one, zero, zero));
        assertThrows(IllegalArgumentException.class, () -> new UnitSums(2, one, one, one, two, one));
        assertThrows(IllegalArgumentException.class, () -> new UnitSums(1, one, zero, one.shiftLeft(107), zero, zero));
        assertThrows(IllegalArgumentException.class, () -> UnitSums.ofUnit(-1, 0));
        assertThrows(IllegalArgumentException.class, () -> UnitSums.ofUnit(1, MOST + 1));
    }

    private static double definition(long[][] units) {
        MathContext digits = new MathContext(80);
        BigDecimal x = BigDecimal.ZERO;
        BigDecimal y = BigDecimal.ZERO;
        for (long[] unit : units) {
            x = x.add(BigDecimal.valueOf(unit[0]));
            y = y.add(BigDecimal.valueOf(unit[1]));
        }
        BigDecimal ratio = y.divide(x, digits);
        BigDecimal squares = BigDecimal.ZERO;
        for (long[] unit : units) {
            BigDecimal residual = BigDecimal.valueOf(unit[1]).subtract(ratio.multiply(BigDecimal.valueOf(unit[0])));
            squares = squares.add(residual.multiply(residual));
        }
        return squares.multiply(BigDecimal.valueOf(units.length))
                .divide(BigDecimal.valueOf(units.length - 1), digits)
                .divide(x.multiply(x), digits)
                .doubleValue();
    }
}
