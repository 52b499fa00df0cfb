package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotNull;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.boundary.BoundarySequence;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.spending.SpendingFunction;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;
import org.junit.jupiter.api.Test;

/** Each direction by its own level, spending and start; each challenger by the level of the moment. Windows are days. */
class DirectionsTest {

    /** Both sides of a comparison are computed by the same numbers in the same order. */
    private static final double SAME = 1e-12;

    private static Plans days(String experiment) {
        return Plans.plan(experiment)
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
                .trust(new TrustLimits(0.02, 0.02, 0.05, Duration.ofDays(30)));
    }

    private static Comparison lookAfter(DecideHost host, int days) {
        for (int day = 0; day < days; day++) {
            host.next(1000, 200, 1000, 200);
        }
        return host.lastLook();
    }

    @Test
    void spendsEachDirectionByItsOwnLevelAndFunction() {
        Plan plan = days("quay-banner")
                .benefit(Tail.of(0.04, Spending.of(Family.OBRIEN_FLEMING)))
                .harm(Tail.of(0.01, Spending.of(Family.POCOCK)))
                .build();
        DecideHost host = new DecideHost(plan);
        BoundarySequence expected = new BoundarySequence();
        for (int day = 1; day <= 3; day++) {
            Comparison look = lookAfter(host, 1);
            Look bounds = expected.next(
                    look.informationFraction(),
                    SpendingFunction.obrienFlemingType().spent(0.04, look.informationFraction()),
                    SpendingFunction.pocockType().spent(0.01, look.informationFraction()));
            assertEquals(bounds.upper(), look.upper(), SAME, "upper boundary of look " + day);
            assertEquals(bounds.lower(), look.lower(), SAME, "lower boundary of look " + day);
            assertEquals(0.05, look.level(), SAME);
        }
    }

    @Test
    void turnsTheDirectionsRoundWhereLowerIsBetter() {
        Plans plan = days("quay-banner")
                .benefit(Tail.of(0.04, Spending.of(Family.OBRIEN_FLEMING)))
                .harm(Tail.of(0.01, Spending.of(Family.POCOCK)));
        Comparison higher = lookAfter(new DecideHost(plan.build()), 1);
        Comparison lower = lookAfter(new DecideHost(plan.better(Better.LOWER).build()), 1);
        assertTrue(lower.upper() < -lower.lower() && higher.upper() > -higher.lower(), lower + " against " + higher);
    }

    @Test
    void keepsASilentDirectionSilentAndThenLetsItSpendWhatItSaved() {
        Plan plan = days("quay-banner")
                .benefit(new Tail(0.025, Spending.of(Family.POCOCK), 0.5))
                .harm(Tail.of(0.025, Spending.of(Family.POCOCK)))
                .smallestEffect(0.022)
                .build();
        DecideHost host = new DecideHost(plan);
        double spentByHarm = 0;
        for (int day = 1; day <= 4; day++) {
            Comparison look = lookAfter(host, 1);
            boolean silent = look.informationFraction() < 0.5;
            assertEquals(silent, look.upper() == null, "look at " + look.informationFraction());
            assertNotNull(look.lower());
            spentByHarm = SpendingFunction.pocockType().spent(0.025, look.informationFraction());
            assertEquals(silent ? spentByHarm : 2 * spentByHarm, look.alphaSpent(), SAME);
        }
        assertTrue(spentByHarm > 0.017, "the silence ended: " + spentByHarm);
    }

    @Test
    void spendsByTheCalendarWhateverTheInformation() {
        Plan plan = days("quay-banner").clock(SpendingClock.CALENDAR).build();
        DecideHost host = new DecideHost(plan);
        for (int day = 1; day <= 4; day++) {
            host.next(100L * day, 20L * day, 100L * day, 20L * day);
            Comparison look = host.lastLook();
            assertEquals(day / 5.0, look.spendingTime(), 0);
            assertEquals(
                    2 * SpendingFunction.obrienFlemingType().spent(0.025, day / 5.0),
                    look.alphaSpent(),
                    SAME,
                    "day " + day + " with information " + look.informationFraction());
        }
        assertEquals(0.05, host.next(500, 100, 500, 100).lastLook().alphaSpent(), SAME);
    }

    @Test
    void measuresByTrialsWhateverTheRates() {
        Plans plan = days("quay-banner").measure(InformationMeasure.TRIALS);
        Comparison low = new DecideHost(plan.build()).next(1000, 50, 1000, 60).lastLook();
        Comparison high =
                new DecideHost(plan.build()).next(1000, 500, 1000, 500).lastLook();
        assertEquals(low.informationFraction(), high.informationFraction(), 0);
        PlanDesign design =
                PlanDesign.of(plan.build(), plan.build().challengers().get(0));
        assertEquals(1000.0 / design.trials().get("plain"), low.informationFraction(), 1e-4);
        assertTrue(low.information() > 2 * high.information(), "the information itself goes by the rates");
    }

    @Test
    void spendsByAnOwnTable() {
        Spending own = Spending.table(new TreeMap<>(Map.of(0.5, 0.1, 1.0, 1.0)));
        Comparison look =
                lookAfter(new DecideHost(days("quay-banner").spending(own).build()), 1);
        assertEquals(0.05 * 0.1 * look.informationFraction() / 0.5, look.alphaSpent(), SAME);
    }

    private static Plans deckMap() {
        return days("deck-map")
                .variants(
                        new Variant("list", 0.4, true),
                        new Variant("coast", 0.3, false),
                        new Variant("islands", 0.3, false))
                .smallestEffect(0.02)
                .spending(Spending.of(Family.POCOCK));
    }

    /** One look at which {@code islands} is far beyond any boundary and {@code coast} beyond that of the raised level only. */
    private static DecideHost lookAtThree(AlphaSharing sharing) {
        return new DecideHost(deckMap().sharing(sharing).build()).next(4000, 800, 3000, 670, 3000, 840);
    }

    @Test
    void leavesTheLevelOfAFoundChallengerToTheOther() {
        DecideHost split = lookAtThree(AlphaSharing.SPLIT);
        Comparison alone = comparison(split, "coast");
        assertEquals(Verdict.CONTINUE, alone.verdict());
        assertEquals(0.025, alone.level(), SAME);

        DecideHost passed = lookAtThree(AlphaSharing.PASS_ON);
        Comparison raised = comparison(passed, "coast");
        assertTrue(raised.z() > raised.upper() && raised.z() < alone.upper(), raised + " against " + alone);
        assertEquals(Verdict.STOP_BENEFIT, raised.verdict(), "found at the same look");
        assertEquals(0.025 + 0.0125, raised.level(), SAME, "all of benefit, half of harm");
        assertEquals(-alone.lower(), -raised.lower(), 1e-6, "the harm boundary stays");
        assertEquals(List.of("stop coast", "stop islands"), passed.noticeKinds());
    }

    @Test
    void doesNotPassOnTheLevelOfAnotherDirection() {
        long[] counts = {4000, 800, 3000, 600, 3000, 300};
        DecideHost host = new DecideHost(deckMap().build()).next(counts);
        assertEquals(Verdict.STOP_HARM, comparison(host, "islands").verdict());
        Comparison coast = comparison(host, "coast");
        Comparison alone =
                comparison(new DecideHost(deckMap().sharing(AlphaSharing.SPLIT).build()).next(counts), "coast");
        assertEquals(alone.upper(), coast.upper(), 1e-6, "the benefit boundary is that of the initial level");
        assertTrue(coast.lower() > alone.lower() + 0.1, "harm is tested at the raised level: " + coast.lower());
    }

    @Test
    void recomputesThePathAtTheRaisedLevelAndSurvivesARestart() {
        DecideHost straight = withALaterStop();
        DecideHost restarted = new DecideHost(deckMap().build());
        List<long[]> windows = laterStop();
        for (int i = 0; i < windows.size(); i++) {
            restarted.next(windows.get(i)).restart(i);
        }
        assertEquals(straight.decisions(), restarted.decisions(), "bit for bit");
        BoundarySequence expected = new BoundarySequence();
        List<Comparison> coast = straight.decisions().stream()
                .flatMap(record -> record.comparisons().stream())
                .filter(look -> look.variant().equals("coast"))
                .toList();
        double upper = 0;
        for (Comparison look : coast) {
            upper = expected.next(
                            look.informationFraction(),
                            SpendingFunction.pocockType().spent(0.025, look.spendingTime()),
                            SpendingFunction.pocockType().spent(0.0125, look.spendingTime()))
                    .upper();
        }
        assertEquals(upper, coast.get(coast.size() - 1).upper(), SAME, "as if the level had been raised all along");
    }

    private static List<long[]> laterStop() {
        return List.of(
                new long[] {1000, 200, 750, 150, 750, 160},
                new long[] {1000, 200, 750, 150, 750, 220},
                new long[] {1000, 200, 750, 150, 750, 220},
                new long[] {1000, 200, 750, 150, 750, 220});
    }

    private static DecideHost withALaterStop() {
        DecideHost host = new DecideHost(deckMap().build());
        laterStop().forEach(host::next);
        assertEquals(Verdict.STOP_BENEFIT, host.view().verdicts().get("islands"));
        assertEquals(Verdict.CONTINUE, host.view().verdicts().get("coast"));
        return host;
    }

    private static Comparison comparison(DecideHost host, String variant) {
        return host.decisions().stream()
                .map(DecisionRecord::comparisons)
                .flatMap(List::stream)
                .filter(look -> look.variant().equals(variant))
                .reduce((first, second) -> second)
                .orElseThrow();
    }

    @Test
    void hasNoHarmToPassOnInAOneSidedTest() {
        DecideHost host =
                new DecideHost(deckMap().sides(Sides.ONE).alpha(0.025).build()).next(4000, 800, 3000, 600, 3000, 840);
        Comparison coast = comparison(host, "coast");
        assertEquals(0.025, coast.level(), SAME);
        assertNull(coast.lower());
    }

    /** One arm nine times the other: for rare successes the skewness is 0.8 / sqrt(0.09 m) with m successes. */
    private static Plans nineToOne(Spending spending) {
        return days("quay-banner")
                .variants(new Variant("plain", 0.9, true), new Variant("wide", 0.1, false))
                .spending(spending)
                .baseline(0.01)
                .smallestEffect(0.003);
    }

    @Test
    void delaysALookWhileArmsOfUnequalSizeHaveFewSuccesses() {
        DecideHost host = new DecideHost(nineToOne(Spending.of(Family.POCOCK)).build()).next(9000, 90, 1000, 10);
        assertEquals(List.of(), host.decisions());
        assertTrue(
                host.view()
                        .delayReason()
                        .startsWith("few successes in arms of unequal size: the error of a direction may"
                                + " exceed its level by "),
                host.view().delayReason());
        assertTrue(host.view().delayReason().endsWith("(a look needs 10 % or less)"));
        host.next(81000, 810, 9000, 90);
        assertEquals(1, host.lastLook().look(), "1000 successes are enough");
    }

    @Test
    void doesNotDelayWhereNextToNothingIsSpentOrTheArmsAreOfOneSize() {
        DecideHost cautious =
                new DecideHost(nineToOne(Spending.of(Family.OBRIEN_FLEMING)).build()).next(9000, 90, 1000, 10);
        assertEquals(1, cautious.lastLook().look());
        DecideHost even = new DecideHost(days("quay-banner")
                        .spending(Spending.of(Family.POCOCK))
                        .baseline(0.01)
                        .smallestEffect(0.003)
                        .build())
                .next(1000, 10, 1000, 10);
        assertEquals(1, even.lastLook().look());
    }

    @Test
    void saysAtTheEndOfTheRunThatTheLevelMayBeOff() {
        DecideHost host = new DecideHost(nineToOne(Spending.of(Family.POCOCK)).build());
        for (int day = 0; day < 5; day++) {
            host.next(1800, 18, 200, 2);
        }
        assertEquals(1, host.lastLook().look(), "the only look is the last");
        assertTrue(
                host.lastLook().reason().contains("; few successes in arms of unequal size"),
                host.lastLook().reason());
        assertEquals(Verdict.EXHAUSTED, host.lastLook().verdict());
    }
}
