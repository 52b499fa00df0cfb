package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import java.util.HashMap;
import java.util.Map;
import java.util.OptionalLong;
import java.util.random.RandomGeneratorFactory;
import org.junit.jupiter.api.Test;

class TrafficTest {

    private static final double[] RATES = {0.12, 0.12, 0.3, 0.5};
    private static final double[] SHARES = {0.5, 0.2, 0.2, 0.1};

    private static final RehearsedPlan FOUR_ARMS = rehearsed(Quay.FOUR_ARMS, 100_001);

    @Test
    void splitsAtRandomByThePlannedShares() {
        long[][] counts = total(traffic(FOUR_ARMS, false, 5), FOUR_ARMS.steps());
        long all = FOUR_ARMS.arrivals();
        assertEquals(all, counts[0][0] + counts[1][0] + counts[2][0] + counts[3][0]);
        for (int variant = 0; variant < 4; variant++) {
            double share = SHARES[variant];
            // Four standard deviations; the seed is fixed.
            assertEquals(share * all, counts[variant][0], 4 * Math.sqrt(all * share * (1 - share)));
            double successes = counts[variant][0] * RATES[variant];
            assertEquals(successes, counts[variant][1], 4 * Math.sqrt(successes * (1 - RATES[variant])));
        }
    }

    @Test
    void splitsToAUnitWhenTheSplitIsFixed() {
        Traffic traffic = traffic(FOUR_ARMS, true, 5);
        long[][] counts = new long[4][2];
        for (int step = 0; step < FOUR_ARMS.steps(); step++) {
            add(counts, traffic, step);
            long sum = 0;
            for (int variant = 0; variant < 4; variant++) {
                assertEquals(SHARES[variant] * FOUR_ARMS.arrivalsBefore(step + 1), counts[variant][0], 1.0 + 1e-6);
                sum += counts[variant][0];
            }
            assertEquals(FOUR_ARMS.arrivalsBefore(step + 1), sum);
        }
    }

    @Test
    void leavesTheUnitsOfAVariantToTheOthers() {
        for (boolean fixed : new boolean[] {false, true}) {
            Traffic traffic = traffic(FOUR_ARMS, fixed, 9);
            traffic.leaveOut(3);
            traffic.leaveOut(1);
            long[][] counts = total(traffic, FOUR_ARMS.steps());
            double all = FOUR_ARMS.arrivals();
            assertEquals(0, counts[1][0]);
            assertEquals(0, counts[3][0]);
            assertEquals(all, counts[0][0] + counts[2][0]);
            assertEquals(all * 5 / 7, counts[0][0], 4 * Math.sqrt(all * 10 / 49));
        }
    }

    @Test
    void followsTheEpochs() {
        String ramp = Quay.TEN_LOOKS + "epochs: [{from: 2026-05-05T00:00:00Z, shares: {plain: 0.1, wide: 0.9}}]\n";
        Traffic traffic = traffic(rehearsed(ramp, 10_000), true, 1);
        assertEquals(5_000, traffic.step(0).get(0).trials());
        for (Cell cell : traffic.step(1)) {
            assertEquals(1, cell.epoch());
            assertEquals(cell.variant() == 0 ? 1_000 : 9_000, cell.trials());
        }
    }

    @Test
    void hasNoCellsWithoutTrials() {
        Traffic traffic = traffic(rehearsed(Quay.TEN_LOOKS, 1), false, 1);
        for (int step = 0; step < 20; step++) {
            assertTrue(traffic.step(step).size() == 1);
        }
    }

    private static long[][] total(Traffic traffic, int steps) {
        long[][] counts = new long[4][2];
        for (int step = 0; step < steps; step++) {
            add(counts, traffic, step);
        }
        return counts;
    }

    private static void add(long[][] counts, Traffic traffic, int step) {
        for (Cell cell : traffic.step(step)) {
            counts[cell.variant()][0] += cell.trials();
            counts[cell.variant()][1] += cell.successes();
        }
    }

    private static Traffic traffic(RehearsedPlan rehearsed, boolean fixed, long seed) {
        double[] rates = new double[rehearsed.plan().variants().size()];
        System.arraycopy(RATES, 0, rates, 0, rates.length);
        return new Traffic(
                rehearsed,
                rates,
                fixed,
                RandomGeneratorFactory.of("L64X128MixRandom").create(seed));
    }

    private static RehearsedPlan rehearsed(String text, long perDay) {
        Plan plan = Quay.plan(text);
        Map<String, PlanDesign> designs = new HashMap<>();
        plan.challengers().forEach(challenger -> designs.put(challenger.name(), PlanDesign.of(plan, challenger)));
        return RehearsedPlan.of(plan, designs, OptionalLong.of(perDay));
    }
}
