package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import io.tallyward.engine.record.Trust;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Random;
import org.apache.commons.math3.distribution.BinomialDistribution;
import org.apache.commons.math3.random.Well19937c;
import org.junit.jupiter.api.Test;

/** Where a mismatch is said to come from. Windows are hours. */
class DecideSplitOriginTest {

    private static final String[] VERSIONS = {"6.1", "6.2", "6.3"};

    private static Plans hours() {
        return Plans.plan("cabin-upsell")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(1))
                .lookEvery(Duration.ofHours(12))
                .smallestEffect(0.01)
                .atMost(Duration.ofDays(20))
                .segments("version");
    }

    private static DecideHost steady(DecideHost host, int hours) {
        for (int hour = 0; hour < hours; hour++) {
            host.nextBySegment("version", VERSIONS, 100, 100, 100, 100, 100, 100);
        }
        return host;
    }

    private static SplitOrigin origin(DecideHost host) {
        return host.lastDecision().split().origin();
    }

    @Test
    void namesTheSegmentThatLosesUnitsAndTheWindowFromWhichItDoes() {
        DecideHost host = steady(new DecideHost(hours().build()), 24);
        while (host.decisions().isEmpty() || host.lastDecision().trust() == Trust.SOUND) {
            host.nextBySegment("version", VERSIONS, 100, 100, 100, 100, 100, 40);
        }
        DecisionRecord record = host.lastDecision();
        SplitOrigin origin = origin(host);
        assertEquals(Plans.FROM.plus(Duration.ofHours(24)), origin.beganFrom());
        assertEquals(Plans.FROM.plus(Duration.ofHours(25)), origin.beganUntil());
        SegmentSplit worst = origin.worst();
        assertEquals("version", worst.field());
        assertEquals("6.3", worst.value());
        assertTrue(worst.standsOut(), worst.toString());
        assertEquals(3, worst.judged());
        long hoursBroken = origin.since().get(0).units() / 300;
        assertEquals(List.of("plain", "wide"), variants(origin.since()));
        assertEquals(240 * hoursBroken, origin.since().get(1).units());
        assertEquals(2400 + 40 * hoursBroken, worst.units().get(1).units());
        assertEquals(
                record.counts().get(1).trials(),
                worst.units().get(1).units() + worst.elsewhere().get(1).units());
        String words = String.format(
                java.util.Locale.ROOT,
                "; it began between 2026-05-05T00:00:00Z and 2026-05-05T01:00:00Z, with version 6.3: wide has %.2f %% of"
                        + " %d units, planned 50.00 %%",
                100.0 * (2400 + 40 * hoursBroken) / (4800 + 140 * hoursBroken),
                4800 + 140 * hoursBroken);
        assertTrue(record.trustReason().endsWith(words), record.trustReason());
        assertEquals(record.trustReason(), host.view().trustReason());
        assertEquals(record.split(), host.view().split());
        Notice notice = host.notices().get(0);
        assertEquals(Notice.Kind.MISMATCH, notice.kind());
        assertTrue(notice.summary().contains(words), notice.summary());
        assertEquals("version 6.3", notice.facts().get("worstSegment"));
        assertEquals("2026-05-05T00:00:00Z", notice.facts().get("beganFrom"));
    }

    private static List<String> variants(List<PlannedUnits> units) {
        return units.stream().map(PlannedUnits::variant).toList();
    }

    @Test
    void saysThatNoSingleSegmentStandsOutWhereAllLoseUnits() {
        DecideHost host = steady(new DecideHost(hours().build()), 5);
        while (host.decisions().isEmpty()) {
            host.nextBySegment("version", VERSIONS, 100, 80, 200, 160, 100, 80);
        }
        SegmentSplit worst = origin(host).worst();
        assertEquals("6.2", worst.value(), "the largest of equally bad ones");
        assertFalse(worst.standsOut());
        assertTrue(worst.adjustedPValue() <= 0.001 && worst.contrastPValue() > 0.001, worst.toString());
        String reason = host.lastDecision().trustReason();
        assertTrue(
                reason.contains(
                        "05:00:00Z and 2026-05-04T06:00:00Z, in no single segment; furthest off is version 6.2: wide"),
                reason);
    }

    @Test
    void namesTheBeginningWhereThePlanNamesNoSegments() {
        DecideHost host = new DecideHost(hours().segments().build());
        for (int hour = 0; hour < 10; hour++) {
            host.next(300, 60, 300, 60);
        }
        while (host.view().trust() == Trust.SOUND) {
            host.next(300, 60, 240, 48);
        }
        assertEquals(Plans.FROM.plus(Duration.ofHours(10)), origin(host).beganFrom());
        assertNull(origin(host).worst());
        assertTrue(
                host.lastDecision()
                        .trustReason()
                        .endsWith("; it began between 2026-05-04T10:00:00Z and 2026-05-04T11:00:00Z"),
                host.lastDecision().trustReason());
    }

    @Test
    void saysNothingOfAnOriginWhileThereIsNoMismatch() {
        DecideHost host = steady(new DecideHost(hours().build()), 24);
        assertNull(host.view().split().origin());
        assertEquals("", host.view().trustReason());
    }

    /** A planned ramp is no change of the split: the mismatch is found in the epoch that it belongs to. */
    @Test
    void findsTheEpochOfTheMismatchAndItsPlannedShares() {
        Plan ramp = hours().variants(new Variant("plain", 0.9, true), new Variant("wide", 0.1, false))
                .epochs(new AllocationEpoch(Plans.FROM.plus(Duration.ofHours(30)), Map.of("plain", 0.5, "wide", 0.5)))
                .build();
        DecideHost host = new DecideHost(ramp);
        for (int hour = 0; hour < 30; hour++) {
            host.nextBySegment("version", VERSIONS, 180, 20, 180, 20, 180, 20);
        }
        steady(host, 6);
        while (host.view().trust() == Trust.SOUND) {
            host.nextBySegment("version", VERSIONS, 60, 100, 100, 100, 100, 100);
        }
        assertEquals(1, origin(host).epoch());
        assertEquals(Plans.FROM.plus(Duration.ofHours(36)), origin(host).beganFrom());
        assertEquals("6.1", origin(host).worst().value());
        assertTrue(
                host.lastDecision().trustReason().contains("with version 6.1: plain has 4"),
                host.lastDecision().trustReason());
    }

    /** Random losses in random hours: the named hour is near the true one, over seeds. */
    @Test
    void isNearTheTrueBeginningAndNamesTheTrueSegmentInNearlyAllRuns() {
        int right = 0;
        int near = 0;
        int runs = 60;
        for (int seed = 0; seed < runs; seed++) {
            Well19937c random = new Well19937c(seed);
            int sound = 1 + random.nextInt(200);
            int broken = random.nextInt(3);
            DecideHost host = new DecideHost(hours().build());
            for (int hour = 0; host.view() == null || host.view().trust() == Trust.SOUND; hour++) {
                long[] units = new long[6];
                for (int i = 0; i < 6; i++) {
                    boolean loses = hour >= sound && i == 2 * broken + 1;
                    units[i] = new BinomialDistribution(random, 200, loses ? 0.3 : 0.5).sample();
                }
                host.nextBySegment("version", VERSIONS, units);
            }
            SplitOrigin origin = origin(host);
            long hours = Duration.between(Plans.FROM, origin.beganFrom()).toHours();
            near += Math.abs(hours - sound) <= 6 ? 1 : 0;
            right += origin.worst().value().equals(VERSIONS[broken])
                            && origin.worst().standsOut()
                    ? 1
                    : 0;
        }
        assertTrue(near >= 0.9 * runs, near + " of " + runs + " near the beginning");
        assertTrue(right >= 0.95 * runs, right + " of " + runs + " segments");
    }

    @Test
    void goesOnAfterARestartAsIfNothingHadHappened() {
        for (int restartAt = 0; restartAt < 40; restartAt += 7) {
            DecideHost undisturbed = new DecideHost(hours().build());
            DecideHost disturbed = new DecideHost(hours().build());
            for (int hour = 0; hour < 40; hour++) {
                long lost = hour < 20 ? 100 : 50;
                undisturbed.nextBySegment("version", VERSIONS, 100, 100, 100, 100, 100, lost);
                disturbed.nextBySegment("version", VERSIONS, 100, 100, 100, 100, 100, lost);
                if (hour == restartAt) {
                    disturbed.restart(disturbed.log().size());
                }
            }
            assertEquals(undisturbed.decisions(), disturbed.decisions(), "restart in hour " + restartAt);
            assertEquals(undisturbed.view(), disturbed.view());
        }
    }

    /** Parts of a window wait in the log for the slowest partition. */
    @Test
    void mergesTheSegmentsOfAllPartitionsInAnyOrderAcrossARestart() {
        Plan plan = hours().build();
        WindowTally first = bySegment(plan, new SegmentCell("version", "6.2", 0, 0, 900));
        WindowTally second = bySegment(
                plan, new SegmentCell("version", "6.2", 0, 0, 100), new SegmentCell("version", "6.3", 0, 1, 100));
        DecideHost one = new DecideHost(plan)
                .take(DecideHost.update(plan, 0, 2, 1, first))
                .take(DecideHost.update(plan, 1, 2, 1, second));
        DecideHost other = new DecideHost(plan).take(DecideHost.update(plan, 1, 2, 1, second));
        other.restart(other.log().size()).take(DecideHost.update(plan, 0, 2, 1, first));
        assertEquals(Trust.MISMATCH, one.lastDecision().trust());
        assertEquals(one.decisions(), other.decisions());
        assertEquals(
                List.of(new PlannedUnits("plain", 0.5, 1000), new PlannedUnits("wide", 0.5, 0)),
                origin(one).worst().units());
    }

    private static WindowTally bySegment(Plan plan, SegmentCell... segments) {
        long[] trials = new long[4];
        for (SegmentCell segment : segments) {
            trials[2 * segment.variant()] += segment.units();
        }
        WindowTally plain = DecideHost.window(plan, 0, trials);
        return new WindowTally(plain.startMillis(), plain.cells(), List.of(segments), plain.outcomes());
    }

    @Test
    void staysBoundedWhateverTheValues() {
        DecideHost host = new DecideHost(hours().atMost(Duration.ofDays(365)).build());
        Random random = new Random(1);
        int size = 0;
        for (int hour = 0; hour < 1_500; hour++) {
            String[] values = new String[40];
            for (int i = 0; i < values.length; i++) {
                values[i] = i < 2 ? VERSIONS[i] : "v" + random.nextInt(1_000_000);
            }
            long[] units = new long[80];
            for (int i = 0; i < 80; i++) {
                units[i] = i < 4 ? 100 : 1;
            }
            host.nextBySegment("version", values, units);
            if (hour % 300 == 299) {
                size = host.log().live().stream()
                        .mapToInt(change -> change.value().length)
                        .max()
                        .orElseThrow();
                assertTrue(size < 6_000, "after " + hour + " hours: " + size + " bytes");
            }
        }
        assertTrue(size > 1_000, "the history is in there: " + size);
    }

    /** What the words say of an experiment whose variant is followed and left out follows from the others alone. */
    @Test
    void looksAtThoseThatAreStillComparedOnly() {
        Plan plan = Plans.plan("deck-map")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(1))
                .variants(
                        new Variant("plain", 0.4, true),
                        new Variant("wide", 0.3, false),
                        new Variant("tall", 0.3, false))
                .lookEvery(Duration.ofHours(12))
                .atMost(Duration.ofDays(20))
                .build();
        DecideHost host = new DecideHost(plan);
        List<String> kinds = new ArrayList<>();
        for (int hour = 0; hour < 40 && !kinds.contains("mismatch"); hour++) {
            boolean told = kinds.contains("stop wide");
            host.next(400, 80, told ? 0 : 300, told ? 0 : 120, told ? 200 : 300, 60);
            kinds = host.noticeKinds();
        }
        assertEquals(List.of("stop wide", "mismatch"), kinds);
        SplitOrigin origin = origin(host);
        assertEquals(List.of("plain", "tall"), variants(origin.since()));
        assertEquals(3.0 / 7, origin.since().get(1).planned(), 1e-15);
        assertEquals(Plans.FROM.plus(Duration.ofHours(12)), origin.beganFrom());
    }
}
