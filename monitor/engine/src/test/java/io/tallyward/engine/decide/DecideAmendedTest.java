package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNull;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.StateLog;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.LateAmendmentException;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanChangedException;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Verdict;
import io.tallyward.engine.verify.Finding;
import io.tallyward.engine.verify.RecordVerifier;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.Set;
import org.junit.jupiter.api.Test;

class DecideAmendedTest {

    private final List<DecisionRecord> decisions = new ArrayList<>();
    private final List<Notice> notices = new ArrayList<>();
    private final StateLog log = new StateLog();

    /** Windows of a day, a look after each. */
    private static Plans days() {
        return Plans.plan("quay-banner")
                .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofDays(1))
                .atMost(Duration.ofDays(10));
    }

    private static Instant day(int number) {
        return Plans.FROM.plus(Duration.ofDays(number));
    }

    private static Amendment amendment(int day, Amendment.Change change) {
        return new Amendment(day(day), "the timetable changes", change);
    }

    private static Amendment shares(int day, double plain) {
        return amendment(day, new Amendment.Shares(Map.of("plain", plain, "wide", 1 - plain)));
    }

    private static Amendment end(int day, int end) {
        return amendment(day, new Amendment.End(day(end)));
    }

    private static Amendment stop(int day) {
        return amendment(day, new Amendment.Stop());
    }

    private static DecideShard shard(Plan plan) {
        return new DecideShard(List.of(plan));
    }

    private static List<PlanBook.Entry> standing(Plan plan) {
        return List.of(new PlanBook.Entry(plan, true));
    }

    private void take(DecideShard shard, TallyUpdate update) {
        shard.apply(update);
        drain(shard);
    }

    private void drain(DecideShard shard) {
        DecideEffects effects = shard.drain();
        log.append(effects.state());
        decisions.addAll(effects.decisions());
        notices.addAll(effects.notices());
    }

    /** A day on which both variants have the same rates, in the shares of the day. */
    private static TallyUpdate even(Plan plan, int day) {
        double plain = plan.sharesIn(plan.epochAt(day(day).toEpochMilli()))[0];
        long trials = Math.round(4000 * plain);
        return day(plan, day, trials, trials / 5, 4000 - trials, (4000 - trials) / 5);
    }

    private static TallyUpdate day(Plan plan, int day, long... trialsAndSuccesses) {
        return DecideHost.update(plan, 0, 1, day + 1, DecideHost.window(plan, day, trialsAndSuccesses));
    }

    private List<Occasion> occasions() {
        return decisions.stream().map(DecisionRecord::occasion).toList();
    }

    private DecisionRecord last() {
        return decisions.get(decisions.size() - 1);
    }

    private Comparison lastLook() {
        return last().comparisons().get(0);
    }

    @Test
    void anAmendmentIsRecordedWhenItTakesEffect() {
        Plan plan = days().build();
        Plan amended = plan.amended(List.of(shares(2, 0.2)));
        DecideShard shard = shard(amended);
        take(shard, even(amended, 0));
        take(shard, even(amended, 1));
        take(shard, even(amended, 2));

        assertEquals(
                List.of(Occasion.PLAN, Occasion.LOOK, Occasion.AMENDED, Occasion.LOOK, Occasion.LOOK), occasions());
        DecisionRecord recorded = decisions.get(2);
        assertEquals(day(1), recorded.windowEnd(), "recorded before the window at whose end it takes effect");
        assertEquals(shares(2, 0.2), recorded.amendment());
        assertEquals(plan, decisions.get(0).plan(), "the plan is recorded as it was frozen");
        assertNull(last().amendment());
        assertEquals(1, last().counts().get(2).epoch());
    }

    @Test
    void theOwnerStopsWithoutALastLook() {
        Plan amended = days().build().amended(List.of(stop(2)));
        DecideShard shard = shard(amended);
        take(shard, even(amended, 0));
        take(shard, day(amended, 1, 2000, 400, 2000, 520));

        assertEquals(List.of(Occasion.PLAN, Occasion.LOOK, Occasion.AMENDED, Occasion.END), occasions());
        assertEquals(Verdict.STOPPED, last().verdict());
        assertEquals(
                List.of(Notice.Kind.STOP), notices.stream().map(Notice::kind).toList());
        assertEquals(Notice.Severity.INFO, notices.get(0).severity());
    }

    @Test
    void aFindingBeforeTheStopStands() {
        Plan amended = days().build().amended(List.of(stop(2)));
        DecideShard shard = shard(amended);
        take(shard, day(amended, 0, 4000, 600, 4000, 1200));
        assertEquals(Verdict.STOP_BENEFIT, last().verdict());
        take(shard, even(amended, 1));

        assertEquals(List.of(Occasion.PLAN, Occasion.LOOK, Occasion.AMENDED), occasions());
        assertEquals(Verdict.STOP_BENEFIT, last().verdict());
    }

    /** Whoever cuts a run short may have seen the counts, so that what is left of alpha stays unspent. */
    @Test
    void aRunThatIsCutShortSpendsNoMoreThanItsClockAllows() {
        Plan plan = days().build();
        Plan amended = plan.amended(List.of(end(1, 2)));
        DecideShard cut = shard(amended);
        take(cut, even(plan, 0));
        take(cut, even(plan, 1));
        Comparison atTheEnd = lastLook();
        assertEquals(Verdict.EXHAUSTED, atTheEnd.verdict());

        decisions.clear();
        DecideShard whole = shard(plan);
        take(whole, even(plan, 0));
        take(whole, even(plan, 1));

        assertEquals(lastLook().spendingTime(), atTheEnd.spendingTime());
        assertEquals(lastLook().upper(), atTheEnd.upper());
        assertTrue(atTheEnd.alphaSpent() < 0.05);
    }

    @Test
    void aRunThatIsCutShortBeforeItsMinimumFindsNoBenefit() {
        Plan amended = days().atLeast(Duration.ofDays(5)).build().amended(List.of(end(1, 2)));
        DecideShard shard = shard(amended);
        take(shard, day(amended, 0, 4000, 600, 4000, 1200));
        take(shard, day(amended, 1, 4000, 600, 4000, 1200));

        assertEquals(Verdict.EXHAUSTED, last().verdict());
        assertNull(lastLook().upper());
    }

    @Test
    void aLongerRunSpendsTheRestAtItsNewEnd() {
        Plan amended =
                days().atMost(Duration.ofDays(2)).smallestEffect(0.005).build().amended(List.of(end(1, 4)));
        DecideShard shard = shard(amended);
        for (int day = 0; day < 4; day++) {
            take(shard, even(amended, day));
        }

        assertEquals(Verdict.EXHAUSTED, last().verdict());
        assertEquals(day(4), last().windowEnd());
        assertEquals(0.05, lastLook().alphaSpent(), 1e-12);
    }

    /** What is known of amendments beforehand makes no difference: live and in a replay the same is decided. */
    @Test
    void itDoesNotMatterWhenAnAmendmentIsLearntOf() {
        Random random = new Random(20261201);
        for (int run = 0; run < 60; run++) {
            Plans plans = days().clock(random.nextInt(4) == 0 ? SpendingClock.CALENDAR : SpendingClock.INFORMATION);
            if (random.nextBoolean()) {
                plans.byView();
            }
            Plan plan = plans.build();
            Plan amended = plan.amended(randomAmendments(random));
            List<TallyUpdate> updates = new ArrayList<>();
            for (int day = 0; day < 12 && day(day).isBefore(amended.end()); day++) {
                long tilt = random.nextInt(200);
                double plain = amended.sharesIn(amended.epochAt(day(day).toEpochMilli()))[0];
                long trials = Math.round(3000 * plain);
                if (random.nextInt(5) == 0) {
                    updates.add(DecideHost.update(amended, 0, 1, day + 1));
                    continue;
                }
                updates.add(day(amended, day, trials, trials / 5, 3000 - trials, (3000 - trials) / 5 + tilt));
            }

            decisions.clear();
            DecideShard knowing = shard(amended);
            updates.forEach(update -> take(knowing, update));
            List<DecisionRecord> known = List.copyOf(decisions);

            decisions.clear();
            StateLog own = new StateLog();
            DecideShard learning = shard(plan);
            int learnt = 0;
            for (int day = 0; day < updates.size(); day++) {
                int due = learnt;
                while (due < amended.amendments().size()
                        && (!amended.amendments().get(due).at().isAfter(day(day + 1)) || random.nextInt(3) == 0)) {
                    due++;
                }
                learnt = due;
                Plan now = plan.amended(amended.amendments().subList(0, learnt));
                learning.adopt(standing(now));
                learning.apply(updates.get(day));
                DecideEffects effects = learning.drain();
                own.append(effects.state());
                decisions.addAll(effects.decisions());
                if (random.nextInt(3) == 0) {
                    learning = shard(now);
                    own.replayCompacted(random.nextInt(own.size() + 1), learning::restore);
                }
            }
            assertEquals(known, decisions, () -> amended.amendments().toString());
            assertEquals(
                    List.of(), differences(known), () -> amended.amendments().toString());
        }
    }

    private static List<Finding> differences(List<DecisionRecord> records) {
        RecordVerifier verifier = new RecordVerifier();
        List<Finding> findings = new ArrayList<>();
        records.forEach(record -> verifier.take(record).ifPresent(findings::add));
        return findings;
    }

    private static List<Amendment> randomAmendments(Random random) {
        List<Amendment> amendments = new ArrayList<>();
        int latest = 0;
        int end = 10;
        for (int i = random.nextInt(4); i > 0 && latest + 2 < end; i--) {
            latest += 1 + random.nextInt(end - latest - 2);
            int kind = random.nextInt(6);
            if (kind == 0) {
                amendments.add(stop(latest));
                return amendments;
            } else if (kind == 1) {
                end = latest + 1 + random.nextInt(10 - latest);
                amendments.add(end(latest, end));
            } else {
                amendments.add(shares(latest, (1 + random.nextInt(8)) / 10.0));
            }
        }
        return amendments;
    }

    @Test
    void anotherPlanIsTakenOverOnlyBeforeAnythingHasArrived() {
        Plan plan = days().build();
        Plan other = days().alpha(0.01).build();
        DecideShard shard = shard(other);
        shard.expect("quay-banner");
        shard.adopt(standing(plan));
        take(shard, even(plan, 0));

        assertEquals(plan, decisions.get(0).plan());
        assertThrows(PlanChangedException.class, () -> shard.adopt(standing(other)));
    }

    @Test
    void aStopOvertakesWhatIsStillToCome() {
        Plan amended = days().build().amended(List.of(shares(6, 0.2), stop(2)));
        DecideShard shard = shard(amended);
        take(shard, even(amended, 0));
        take(shard, even(amended, 1));

        assertEquals(List.of(Occasion.PLAN, Occasion.LOOK, Occasion.AMENDED, Occasion.END), occasions());
        assertEquals(stop(2), decisions.get(2).amendment());
        assertEquals(List.of(), differences(decisions));
    }

    @Test
    void stateOfAnExperimentWithoutAPlanIsKnownToBeLeftOut() {
        Plan plan = days().build();
        DecideShard shard = shard(plan);
        take(shard, even(plan, 0));
        DecideShard early = new DecideShard(List.of());
        log.replayCompacted(0, early::restore);

        assertEquals(Set.of("quay-banner"), early.unplannedState());
        DecideShard restored = shard(plan);
        log.replayCompacted(0, restored::restore);
        assertEquals(Set.of(), restored.unplannedState());
    }

    @Test
    void anAmendmentThatCameTooLateIsRefusedAfterARestartToo() {
        Plan plan = days().build();
        DecideShard shard = shard(plan);
        take(shard, even(plan, 0));
        take(shard, even(plan, 1));
        DecideShard restarted = shard(plan.amended(List.of(shares(1, 0.2))));

        assertThrows(LateAmendmentException.class, () -> log.replayCompacted(0, restarted::restore));
    }

    @Test
    void anAmendmentThatComesTooLateIsRefused() {
        Plan plan = days().build();
        DecideShard shard = shard(plan);
        take(shard, even(plan, 0));
        take(shard, even(plan, 1));

        LateAmendmentException late = assertThrows(
                LateAmendmentException.class, () -> shard.adopt(standing(plan.amended(List.of(shares(1, 0.2))))));
        assertTrue(late.getMessage().contains(day(1).toString()), late.getMessage());
        assertTrue(late.getMessage().contains(day(2).toString()), late.getMessage());
    }

    @Test
    void eachRefusedProposalIsToldOnce() {
        Plan plan = days().build();
        PlanBook book = new PlanBook();
        book.propose(plan, Plans.FROM);
        book.freeze("quay-banner");
        book.propose(days().power(0.9).build(), Plans.FROM);
        DecideShard shard = shard(plan);
        shard.expect("quay-banner");
        shard.refuse("quay-banner", book.refusals().get("quay-banner"));
        shard.refuse("quay-banner", book.refusals().get("quay-banner"));
        drain(shard);
        DecideShard restarted = shard(plan);
        log.replayCompacted(0, restarted::restore);
        book.propose(days().power(0.95).build(), Plans.FROM);
        restarted.refuse("quay-banner", book.refusals().get("quay-banner"));
        drain(restarted);

        assertEquals(
                List.of(
                        "quay-banner: a changed plan is refused, and the frozen plan stands: test.power is 0.8, not 0.9.",
                        "quay-banner: a changed plan is refused, and the frozen plan stands: test.power is 0.8, not 0.95."),
                notices.stream().map(Notice::summary).toList());
        assertEquals(Notice.Kind.PLAN_REFUSED, notices.get(0).kind());
        assertEquals("plan-refused", notices.get(0).kind().code());
        assertEquals(2, notices.stream().map(Notice::id).distinct().count());
    }
}
