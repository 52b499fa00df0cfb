package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.record.Verdict;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.Random;
import org.junit.jupiter.api.Tag;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;

/**
 * False stops of plans that count views, through the whole deciding side, with fixed seeds: ten days without an effect, a look
 * a day, units that come back and click by their own propensity. Beside it the same views taken for independent trials.
 */
class ViewErrorRateTest {

    private static final int DAYS = 10;
    private static final int ARRIVALS = 60;
    private static final double RATE = 0.2;
    private static final double ALPHA = 0.05;
    private static final double STANDARD_ERRORS = 3;
    private static final long SEED = 20260504L;
    private static final Path PAGE = Path.of("../statistics/STATISTICS.md");

    /** How the units of a day are split between the variants; days count from 0. */
    private interface Arrivals {
        int[] on(int day);
    }

    private record Errors(double stops, double independent, int runs) {

        void areThoseOfAValidTestOnly() {
            double allowed = ALPHA + STANDARD_ERRORS * Math.sqrt(ALPHA * (1 - ALPHA) / runs);
            assertTrue(stops <= allowed, () -> this + " (expected: stops at most " + allowed + "), seed " + SEED);
            assertTrue(stops >= ALPHA / 4, () -> this + " (expected: stops of a test that looks), seed " + SEED);
            assertTrue(independent > 2 * ALPHA, () -> this + " (expected: independent beyond twice the level)");
        }

        /** STATISTICS.md quotes them. */
        void areThoseOfThePage(String plan) throws IOException {
            String row = String.format(Locale.ROOT, "| %s | %.4f | %.4f |", plan, stops, independent);
            assertTrue(Files.readString(PAGE).contains(row), () -> PAGE + " (expected: " + row + ")");
        }
    }

    private static Plans plan(Family family) {
        return Plans.plan("quay-banner")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
                .spending(Spending.of(family))
                .alpha(ALPHA)
                .baseline(RATE)
                .smallestEffect(0.045)
                .atMost(Duration.ofDays(DAYS));
    }

    private static Errors errors(Plans plans, Arrivals arrivals, int runs) {
        Plan views = plans.byView().build();
        Plan units = plans.byUnit().build();
        DecisionMemo memo = new DecisionMemo(0);
        Random random = new Random(SEED);
        int stops = 0;
        int independent = 0;
        for (int run = 0; run < runs; run++) {
            DecideShard byView = new DecideShard(List.of(views), memo, Detail.BARE);
            DecideShard naive = new DecideShard(List.of(units), memo, Detail.BARE);
            ClusteredViews stream = new ClusteredViews(random, RATE);
            for (int day = 0; day < DAYS; day++) {
                List<Cell> cells = stream.day(views.epochAt(DecideHost.startOf(views, day)), arrivals.on(day));
                byView.apply(DecideHost.update(views, 0, 1, day + 1, DecideHost.window(views, day, cells)));
                naive.apply(DecideHost.update(units, 0, 1, day + 1, DecideHost.window(units, day, trials(cells))));
            }
            stops += stopped(byView) ? 1 : 0;
            independent += stopped(naive) ? 1 : 0;
        }
        return new Errors((double) stops / runs, (double) independent / runs, runs);
    }

    private static List<Cell> trials(List<Cell> cells) {
        return cells.stream()
                .map(cell -> Cell.ofUnits(cell.epoch(), cell.variant(), cell.trials(), cell.successes()))
                .toList();
    }

    /** What the looks found: whether the split of views is trusted is not the question here. */
    private static boolean stopped(DecideShard shard) {
        ExperimentView view = shard.views().get("quay-banner");
        Verdict found = view.held().getOrDefault("wide", view.verdict());
        return found == Verdict.STOP_BENEFIT || found == Verdict.STOP_HARM;
    }

    private static int[] even(int day) {
        return new int[] {ARRIVALS, ARRIVALS};
    }

    private static Errors withARamp(int runs) {
        Plans ramp = plan(Family.POCOCK)
                .epochs(new AllocationEpoch(Plans.FROM.plus(Duration.ofDays(4)), Map.of("plain", 0.3, "wide", 0.7)));
        return errors(ramp, day -> day < 4 ? new int[] {60, 60} : new int[] {36, 84}, runs);
    }

    @Test
    void keepsTheLevelThoughViewsDependOnEachOther() {
        errors(plan(Family.POCOCK), ViewErrorRateTest::even, 400).areThoseOfAValidTestOnly();
    }

    @Test
    void keepsTheLevelThroughARamp() {
        withARamp(400).areThoseOfAValidTestOnly();
    }

    @Tag("slow")
    @ParameterizedTest
    @CsvSource(
            delimiter = ';',
            quoteCharacter = '"',
            value = {"OBRIEN_FLEMING; O'Brien-Fleming type", "POCOCK; Pocock type"})
    void keepsTheLevelInManyRuns(Family family, String name) throws IOException {
        Errors errors = errors(plan(family), ViewErrorRateTest::even, 10_000);
        errors.areThoseOfAValidTestOnly();
        errors.areThoseOfThePage(name);
    }

    @Tag("slow")
    @Test
    void keepsTheLevelThroughARampInManyRuns() throws IOException {
        Errors errors = withARamp(10_000);
        errors.areThoseOfAValidTestOnly();
        errors.areThoseOfThePage("Pocock type, a ramp from 1:1 to 3:7 after four days");
    }
}
