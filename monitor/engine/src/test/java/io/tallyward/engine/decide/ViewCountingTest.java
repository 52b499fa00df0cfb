package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.Clustering;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.UnitTotals;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.ratio.RatioStratum;
import io.tallyward.statistics.ratio.StratifiedRatioComparison;
import io.tallyward.statistics.ratio.UnitSums;
import java.math.BigInteger;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.Random;
import org.junit.jupiter.api.Test;

/** Plans that count views: windows are days, so that every window brings a look. */
class ViewCountingTest {

    private static final long SEED = 1977;

    private static Plans days() {
        return Plans.plan("quay-banner")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
                .atMost(Duration.ofDays(5));
    }

    /** Units that all have equally many views, of which all or none were clicked. */
    private static Cell allOrNothing(int variant, long units, long viewsEach, long clickers) {
        return new Cell(
                0,
                variant,
                units,
                units * viewsEach,
                clickers * viewsEach,
                units * viewsEach * viewsEach,
                clickers * viewsEach * viewsEach,
                clickers * viewsEach * viewsEach);
    }

    private static DecideHost oneDay(Plan plan, Cell... cells) {
        return new DecideHost(plan).nextCells(cells);
    }

    @Test
    void decidesAsByUnitWhereEveryUnitHasOneView() {
        Cell plain = Cell.ofUnits(0, 0, 2000, 400);
        Cell wide = Cell.ofUnits(0, 1, 2000, 430);
        Comparison views = oneDay(days().byView().build(), plain, wide).lastLook();
        Comparison units = oneDay(days().build(), plain, wide).lastLook();
        double variance = (0.2 * 0.8 + 0.215 * 0.785) / 1999;
        assertEquals(0.015 / Math.sqrt(variance), views.z(), 1e-12);
        assertEquals(1 / variance, views.information(), 1e-9 / variance);
        assertEquals(units.difference(), views.difference(), 1e-16);
        assertEquals(units.z(), views.clustering().independentZ());
        assertEquals(2000.0 / 1999, views.clustering().designEffect(), 1e-12);
        assertEquals(units.lift().value(), views.lift().value(), 1e-12);
        assertEquals(units.informationFraction(), views.informationFraction(), 0.001);
        assertNull(units.clustering());
    }

    @Test
    void takesUnitsOfManyLikeViewsForOneTrialEach() {
        Comparison look = oneDay(days().byView().build(), allOrNothing(0, 2000, 4, 400), allOrNothing(1, 2000, 4, 430))
                .lastLook();
        Comparison once = oneDay(days().byView().build(), Cell.ofUnits(0, 0, 2000, 400), Cell.ofUnits(0, 1, 2000, 430))
                .lastLook();
        assertEquals(once.z(), look.z(), 1e-12);
        assertEquals(4 * once.clustering().designEffect(), look.clustering().designEffect(), 1e-12);
        assertEquals(2 * once.clustering().independentZ(), look.clustering().independentZ(), 1e-12);
    }

    @Test
    void recordsAllThatAComputationNeeds() {
        Plan plan = days().byView()
                .epochs(new AllocationEpoch(Plans.FROM.plus(Duration.ofDays(2)), Map.of("plain", 0.3, "wide", 0.7)))
                .build();
        DecideHost host = new DecideHost(plan);
        ClusteredViews stream = new ClusteredViews(new Random(SEED), 0.2);
        for (int day = 0; day < 4; day++) {
            int[] arrivals = day < 2 ? new int[] {300, 300} : new int[] {180, 420};
            host.nextCells(stream.day(day < 2 ? 0 : 1, arrivals).toArray(Cell[]::new));
        }
        DecisionRecord record = host.lastDecision();
        assertEquals(4, record.counts().size());
        List<RatioStratum> strata = new ArrayList<>();
        List<Stratum> views = new ArrayList<>();
        for (int epoch = 0; epoch < 2; epoch++) {
            VariantCount plain = record.counts().get(2 * epoch);
            VariantCount wide = record.counts().get(2 * epoch + 1);
            strata.add(new RatioStratum(sums(wide), sums(plain)));
            views.add(new Stratum(wide.successes(), wide.trials(), plain.successes(), plain.trials()));
        }
        StratifiedRatioComparison found = StratifiedRatioComparison.of(strata).orElseThrow();
        assertEquals(found.z(), host.lastLook().z());
        assertEquals(found.difference(), host.lastLook().difference());
        assertEquals(found.information(), host.lastLook().information());
        assertEquals(
                StratifiedComparison.of(views).orElseThrow().z(),
                host.lastLook().clustering().independentZ());
        assertTrue(host.lastLook().clustering().designEffect() > 1.5, "views of a unit resemble each other");
    }

    private static UnitSums sums(VariantCount count) {
        return new UnitSums(
                count.units(),
                BigInteger.valueOf(count.trials()),
                BigInteger.valueOf(count.successes()),
                BigInteger.valueOf(count.unitTotals().trialSquares()),
                BigInteger.valueOf(count.unitTotals().products()),
                BigInteger.valueOf(count.unitTotals().successSquares()));
    }

    @Test
    void recordsNoSumsOfUnits() {
        DecideHost host = oneDay(days().build(), Cell.ofUnits(0, 0, 2000, 400), Cell.ofUnits(0, 1, 2000, 430));
        assertNull(host.lastDecision().counts().get(0).unitTotals());
        assertEquals(2000, host.lastDecision().counts().get(0).units());
    }

    @Test
    void warnsWhereIndependentViewsWouldHaveDecidedOtherwise() {
        DecideHost host =
                oneDay(days().byView().build(), allOrNothing(0, 2000, 16, 400), allOrNothing(1, 2000, 16, 430));
        Comparison look = host.lastLook();
        assertEquals(Verdict.CONTINUE, look.verdict());
        Clustering clustering = look.clustering();
        assertTrue(clustering.independentZ() > look.upper() && look.z() < look.upper());
        assertEquals(
                String.format(
                        Locale.ROOT,
                        "z %.3f lies between the boundaries; taking views for independent would give z %.3f and say"
                                + " stop-benefit instead, but the views of a unit are not (design effect %.2f)",
                        look.z(),
                        clustering.independentZ(),
                        clustering.designEffect()),
                look.reason());
    }

    @Test
    void tellsViewsAndUnitsInNotices() {
        DecideHost host =
                oneDay(days().byView().build(), allOrNothing(0, 4000, 3, 800), allOrNothing(1, 4000, 3, 1100));
        assertEquals(List.of("stop wide"), host.noticeKinds());
        Map<String, String> facts = host.notices().get(0).facts();
        assertEquals("4000", facts.get("units.wide"));
        assertEquals("12000", facts.get("views.wide"));
        assertEquals("3300", facts.get("clickedViews.wide"));
        assertEquals("3.00", facts.get("designEffect"));
        assertFalse(facts.containsKey("trials.wide") || facts.containsKey("successes.wide"));
        DecideHost units = oneDay(days().build(), Cell.ofUnits(0, 0, 4000, 800), Cell.ofUnits(0, 1, 4000, 1100));
        Map<String, String> unitFacts = units.notices().get(0).facts();
        assertEquals("4000", unitFacts.get("trials.wide"));
        assertFalse(unitFacts.containsKey("units.wide") || unitFacts.containsKey("designEffect"));
    }

    @Test
    void doesNotWarnWhereBothAgree() {
        Comparison look = oneDay(
                        days().byView().build(), allOrNothing(0, 2000, 16, 400), allOrNothing(1, 2000, 16, 402))
                .lastLook();
        assertTrue(look.reason().endsWith("lies between the boundaries"), look.reason());
    }

    @Test
    void waitsUntilThereAreUnitsEnough() {
        DecideHost host = oneDay(days().byView().build(), allOrNothing(0, 99, 40, 20), allOrNothing(1, 200, 40, 40));
        assertTrue(host.decisions().isEmpty());
        assertEquals(
                "the views of plain weigh as much as those of 99.0 units with equally many each (a look needs 100)",
                host.view().delayReason());
        host.nextCells(allOrNothing(0, 101, 40, 20), allOrNothing(1, 1, 40, 0));
        assertEquals(1, host.lastLook().look());
    }

    @Test
    void waitsWhileOneUnitOutweighsTheOthers() {
        Cell robot = new Cell(0, 1, 1, 5000, 0, 25_000_000, 0, 0);
        DecideHost host = oneDay(
                days().byView().build(),
                allOrNothing(0, 1000, 4, 200),
                allOrNothing(1, 1000, 4, 200).plus(robot));
        assertTrue(host.decisions().isEmpty());
        assertTrue(host.view().delayReason().startsWith("the views of wide weigh as much as those of 3.2 units"));
    }

    @Test
    void saysSoWhereNothingVaries() {
        Cell plain = new Cell(0, 0, 500, 2000, 500, 8000, 2000, 500);
        Cell wide = new Cell(0, 1, 500, 2000, 500, 8000, 2000, 500);
        DecideHost host = oneDay(days().byView().build(), plain, wide);
        assertTrue(host.decisions().isEmpty());
        assertEquals(Readiness.NOTHING_VARIES, host.view().delayReason());
    }

    @Test
    void checksTheSplitOfUnitsNotOfViews() {
        Cell plain = allOrNothing(0, 1000, 2, 200);
        Cell wide = allOrNothing(1, 1000, 6, 200);
        DecideHost evenUnits = oneDay(days().byView().build(), plain, wide);
        assertEquals(Trust.SOUND, evenUnits.view().trust(), evenUnits.view().trustReason());
        DecideHost evenViews =
                oneDay(days().byView().build(), allOrNothing(0, 1200, 2, 200), allOrNothing(1, 800, 3, 160));
        assertEquals(Trust.MISMATCH, evenViews.view().trust());
        DecideHost units = oneDay(days().build(), Cell.ofUnits(0, 0, 1200, 200), Cell.ofUnits(0, 1, 800, 160));
        assertEquals(units.view().split(), evenViews.view().split());
    }

    @Test
    void weighsSkewnessByTheDesignEffect() {
        Evidence views = evidence(days().byView().build(), allOrNothing(0, 9000, 4, 90), allOrNothing(1, 1000, 4, 10));
        Evidence once = evidence(days().build(), Cell.ofUnits(0, 0, 9000, 90), Cell.ofUnits(0, 1, 1000, 10));
        assertTrue(once.skewness() > 0.1);
        assertEquals(once.skewness(), views.skewness(), 0.001 * once.skewness());
    }

    private static Evidence evidence(Plan plan, Cell... cells) {
        CumulativeCounts counts = new CumulativeCounts(plan);
        for (Cell cell : cells) {
            counts.add(cell);
        }
        return counts.evidence(1).orElseThrow();
    }

    @Test
    void passesOverAnEpochWithoutTwoUnitsInEachArm() {
        Plan plan = days().byView()
                .epochs(new AllocationEpoch(Plans.FROM.plus(Duration.ofDays(2)), Map.of("plain", 0.3, "wide", 0.7)))
                .build();
        Cell plain = allOrNothing(0, 900, 4, 90);
        Cell wide = allOrNothing(1, 1000, 4, 120);
        Evidence before = evidence(plan, plain, wide);
        Evidence begun =
                evidence(plan, plain, wide, new Cell(1, 0, 1, 3, 1, 9, 3, 1), new Cell(1, 1, 5, 9, 2, 27, 6, 2));
        assertEquals(before, begun);
    }

    @Test
    void losesNothingInARestart() {
        Plan plan = days().byView().build();
        DecideHost straight = new DecideHost(plan);
        DecideHost restarted = new DecideHost(plan);
        ClusteredViews stream = new ClusteredViews(new Random(SEED), 0.2);
        for (int day = 0; day < 5; day++) {
            Cell[] cells = stream.day(0, 300, 300).toArray(Cell[]::new);
            straight.nextCells(cells);
            restarted.nextCells(cells).restart(day);
        }
        assertEquals(straight.decisions(), restarted.decisions());
        assertFalse(straight.decisions().isEmpty());
        assertEquals(straight.view(), restarted.view());
        UnitTotals totals = restarted.view().counts().get(0).unitTotals();
        assertTrue(totals.trialSquares() > totals.products() && totals.products() > totals.successSquares());
    }
}
