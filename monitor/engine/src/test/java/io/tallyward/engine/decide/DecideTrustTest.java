package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Silence;
import io.tallyward.engine.record.SplitPeak;
import io.tallyward.engine.record.SplitPeak.EpochUnits;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;

/** When the data are not believed, what is then held back, and when it is told after all. Windows are hours. */
class DecideTrustTest {

    private static final Plan CABIN_UPSELL = hours().build();

    private final DecideHost host = new DecideHost(CABIN_UPSELL);

    private static Plans hours() {
        return Plans.plan("cabin-upsell")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(1))
                .trust(new TrustLimits(0.02, 0.02, 0.05, Duration.ofHours(6)))
                .lookEvery(Duration.ofHours(12))
                .smallestEffect(0.01)
                .atMost(Duration.ofDays(2));
    }

    private static OutcomeCounts events(Outcome outcome, long count) {
        return new OutcomeCounts.Builder().add(outcome, count).build();
    }

    private DecideHost hours(int count, long... trialsAndSuccesses) {
        for (int hour = 0; hour < count; hour++) {
            host.next(trialsAndSuccesses);
        }
        return host;
    }

    @Test
    void reportsAMismatchAtOnceAndOnce() {
        host.next(1000, 200, 700, 140).next(1000, 200, 700, 140);
        DecisionRecord record = host.lastDecision();
        assertEquals(Occasion.TRUST, record.occasion());
        assertEquals(Trust.MISMATCH, record.trust());
        assertTrue(record.split().sequentialPValue() <= 0.001);
        assertEquals(1, host.decisions().size());
        assertEquals(List.of("mismatch"), host.noticeKinds());
        assertEquals(Notice.Severity.PAGE, host.notices().get(0).severity());
        assertEquals(
                "cabin-upsell: " + record.trustReason() + ".",
                host.notices().get(0).summary());
    }

    @Test
    void holdsEveryVerdictWhileTheSplitContradictsThePlan() {
        hours(12, 1000, 200, 700, 210);
        DecisionRecord look = host.lastDecision();
        assertEquals(Occasion.LOOK, look.occasion());
        assertEquals(Verdict.CONTINUE, look.comparisons().get(0).verdict());
        assertEquals(Verdict.STOP_BENEFIT, look.comparisons().get(0).held());
        assertEquals(Verdict.CONTINUE, look.verdict());
        assertTrue(look.comparisons().get(0).reason().endsWith("; held until the data are trusted again"));
        hours(36, 1000, 200, 1000, 200);
        assertEquals(List.of("mismatch"), host.noticeKinds(), "a mismatch never goes away and nothing else is told");
        assertEquals(Verdict.STOP_BENEFIT, host.view().comparisons().get("wide").held());
    }

    @Test
    void doesNotForgetAMismatchThatAnotherEvensOut() {
        host.next(1000, 200, 700, 140).next(700, 140, 1000, 200);
        assertEquals(Trust.MISMATCH, host.view().trust());
        assertTrue(host.view().split().logBayesFactor() < 0, "by now the counts are even");
        assertTrue(host.view().split().sequentialPValue() <= 0.001, "the p-value never rises");
        SplitPeak peak = host.view().split().peak();
        assertEquals(List.of(new EpochUnits(0, "plain", 1000), new EpochUnits(0, "wide", 700)), peak.units());
        assertEquals(host.view().split().sequentialPValue(), StrictMath.exp(-peak.logBayesFactor()));
    }

    @Test
    void seesNoMismatchInARampThatFollowsThePlan() {
        Plan ramp = hours().epochs(
                        new AllocationEpoch(Plans.FROM.plus(Duration.ofHours(3)), Map.of("plain", 0.9, "wide", 0.1)))
                .build();
        DecideHost ramped = new DecideHost(ramp);
        for (int hour = 0; hour < 12; hour++) {
            ramped.next(hour < 3 ? 500 : 900, 100, hour < 3 ? 500 : 100, 20);
        }
        assertEquals(Trust.SOUND, ramped.view().trust(), ramped.view().trustReason());
        assertEquals(2, ramped.lastDecision().split().pearsonDegreesOfFreedom(), "one per epoch");
        assertEquals(4, ramped.lastDecision().counts().size());
    }

    @Test
    void holdsAVerdictOfAStarvedVariantAndTellsItOnRecovery() {
        hours(6, 2000, 400, 2000, 520);
        hours(6, 7, 1, 0, 0);
        DecisionRecord look = host.lastDecision();
        assertEquals(Trust.STARVED, look.trust());
        assertEquals(
                "no trial of wide since 2026-05-04T06:00:00Z (6.0 h), although about 21 were due", look.trustReason());
        assertEquals(new Silence("wide", Plans.FROM.plus(Duration.ofHours(6)), 21), look.silence());
        assertEquals(Verdict.STOP_BENEFIT, look.comparisons().get(0).held());
        assertEquals(List.of("starved"), host.noticeKinds());
        hours(1, 7, 1, 7, 1);
        DecisionRecord recovered = host.lastDecision();
        assertEquals(Occasion.TRUST, recovered.occasion());
        assertEquals(Trust.SOUND, recovered.trust());
        assertEquals("", recovered.trustReason());
        assertNull(recovered.silence());
        assertEquals(Verdict.STOP_BENEFIT, recovered.verdict());
        assertEquals(List.of("starved", "recovered", "stop wide"), host.noticeKinds());
        assertNull(host.view().comparisons().get("wide").held());
        assertEquals(Verdict.STOP_BENEFIT, host.view().comparisons().get("wide").verdict());
    }

    @Test
    void callsTheWholeStreamStarvedAfterTheLimitOfSilence() {
        hours(1, 100, 20, 100, 20).quiet(5);
        assertEquals(Trust.SOUND, host.view().trust());
        host.quiet(1);
        assertEquals(Trust.STARVED, host.view().trust());
        assertEquals(
                "no trial of any variant since 2026-05-04T01:00:00Z (6.0 h)",
                host.view().trustReason());
    }

    @Test
    void takesTheSilenceAfterTheLastVerdictForItsConsequence() {
        hours(12, 1000, 200, 1000, 260).quiet(12);
        assertEquals(List.of("stop wide"), host.noticeKinds());
        assertEquals(Trust.SOUND, host.view().trust(), host.view().trustReason());
    }

    @Test
    void doesNotCallAVariantStarvedThatHadFewTrialsDue() {
        hours(1, 5, 1, 5, 1);
        hours(8, 2, 0, 0, 0);
        assertEquals(Trust.SOUND, host.view().trust(), "8 trials were due; their absence is no proof");
    }

    @Test
    void countsTheTrialsDueSinceAVariantWasLastSeen() {
        hours(1, 2000, 400, 2000, 400);
        hours(5, 10, 2, 0, 0);
        hours(1, 10, 2, 1, 0);
        hours(7, 2, 0, 0, 0);
        assertEquals(Trust.SOUND, host.view().trust(), "7 were due since the last one, 25 before it");
    }

    @Test
    void complainsOfCrossoversAboveTheLimitAndRecoversWellBelowIt() {
        complainsAndRecovers(Outcome.CROSSOVER, Trust.CROSSOVER, "crossover");
        assertEquals(Notice.Severity.TICKET, host.notices().get(0).severity());
    }

    @Test
    void complainsOfLateEventsAboveTheLimitAndRecoversWellBelowIt() {
        complainsAndRecovers(Outcome.LATE, Trust.LATE, "late");
    }

    @Test
    void complainsOfOrphansThatAreMoreFrequentUnderOneVariantAndRecoversWellBelowIt() {
        host.next(orphans(30, 49), 1000, 700, 1000, 701);
        assertEquals(Trust.SOUND, host.view().trust(), "730 clicks of plain are too few to compare");
        host.next(orphans(0, 80), 1000, 300, 1000, 300);
        assertEquals(Trust.ORPHANS, host.view().trust(), "129 of 1130 clicks of wide, 30 of 1030 of plain");
        assertTrue(
                host.notices().get(0).summary().contains("11.42 % of the clicks under wide have no view before them"),
                host.notices().get(0).summary());
        host.next(orphans(0, 0), 1000, 500, 1000, 500);
        assertEquals(Trust.ORPHANS, host.view().trust(), "7.9 % to 2.0 %: not much below");
        host.next(orphans(0, 0), 2000, 1500, 2000, 1500);
        assertEquals(Trust.SOUND, host.view().trust(), "4.1 % to 1.0 %");
        assertEquals(List.of("orphans", "recovered"), host.noticeKinds());
    }

    @Test
    void orphansThatAreAsFrequentUnderEveryVariantAreNoComplaint() {
        host.next(orphans(400, 500), 2000, 1000, 2000, 1250);
        assertEquals(Trust.SOUND, host.view().trust(), "more clicks under a better variant have more orphans");
    }

    private static OutcomeCounts orphans(long plain, long wide) {
        return new OutcomeCounts.Builder()
                .add(Outcome.ORPHAN, plain + wide)
                .addOrphans(0, plain)
                .addOrphans(1, wide)
                .build();
    }

    private void complainsAndRecovers(Outcome outcome, Trust trust, String kind) {
        host.next(events(outcome, 50), 400, 20, 400, 20);
        assertEquals(Trust.SOUND, host.view().trust(), "890 events are too few to judge");
        host.next(events(outcome, 0), 500, 0, 500, 0);
        assertEquals(trust, host.view().trust(), "50 of 1890");
        host.next(events(outcome, 0), 400, 0, 400, 0);
        assertEquals(trust, host.view().trust(), "50 of 2690 is below the limit, but not well below it");
        host.next(events(outcome, 0), 400, 0, 400, 0);
        assertEquals(Trust.SOUND, host.view().trust(), "50 of 3490 is below four fifths of the limit");
        assertEquals(List.of(kind, "recovered"), host.noticeKinds());
        assertEquals(2, host.decisions().size());
    }

    @Test
    void staysSoundExactlyAtTheLimit() {
        host.next(events(Outcome.CROSSOVER, 20), 490, 0, 490, 0);
        assertEquals(Trust.SOUND, host.view().trust(), "20 of 1000 is the limit");
        host.next(events(Outcome.CROSSOVER, 1), 0, 0, 0, 0);
        assertEquals(Trust.CROSSOVER, host.view().trust());
    }

    @Test
    void tellsTheWorstComplaint() {
        host.next(events(Outcome.LATE, 500), 500, 100, 500, 100);
        assertEquals(Trust.LATE, host.view().trust());
        host.next(events(Outcome.CROSSOVER, 500), 500, 100, 500, 100);
        assertEquals(Trust.CROSSOVER, host.view().trust());
        host.next(1000, 200, 100, 20);
        assertEquals(Trust.MISMATCH, host.view().trust());
        assertEquals(List.of("late", "crossover", "mismatch"), host.noticeKinds());
    }

    @Test
    void remindsOfAStopThatWasToldBeforeTrustWasLost() {
        hours(12, 1000, 200, 1000, 260);
        assertEquals(List.of("stop wide"), host.noticeKinds());
        hours(3, 1000, 200, 100, 20);
        Notice mismatch = host.notices().get(1);
        assertEquals(Notice.Kind.MISMATCH, mismatch.kind());
        assertEquals(Notice.Severity.TICKET, mismatch.severity(), "following the verdict looks like this, too");
        assertTrue(
                mismatch.action()
                        .endsWith(
                                " Every verdict was told earlier: if the traffic was changed because of it, nothing is"
                                        + " wrong; otherwise review it."),
                mismatch.action());
        assertEquals(Verdict.STOP_BENEFIT, host.view().verdict(), "the verdict stands, shown with its trust");
    }
}
