package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.StateLog;
import io.tallyward.engine.count.CountOracle.Arrival;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.LateAmendmentException;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanChangedException;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Random;
import java.util.Set;
import java.util.TreeMap;
import org.junit.jupiter.api.Test;

/** Plans that come, change and are amended while a shard counts. */
class CountAdoptTest {

    private static final Plan QUAY = Plans.plan("quay-banner").build();
    private static final Plan FARE = Plans.plan("fare-chip").segments("version").build();

    private static CountShard shard(Plan... plans) {
        return new CountShard(0, 1, List.of(plans), CountHost.settings(), List.of("events"));
    }

    private static List<PlanBook.Entry> entries(boolean frozen, Plan... plans) {
        return List.of(plans).stream()
                .map(plan -> new PlanBook.Entry(plan, frozen))
                .toList();
    }

    private static Optional<RejectReason> feed(CountShard shard, String experiment, String variant, double minute) {
        long at = Events.at(minute);
        return shard.apply(0, at, Events.view(experiment, variant, "unit-" + minute, "e-" + minute, minute));
    }

    private static OutcomeCounts outcomes(CountShard shard, String experiment) {
        return shard.view().experiments().get(experiment).outcomes();
    }

    @Test
    void aPlanThatComesLaterIsCountedFromThenOn() {
        CountShard shard = shard(QUAY);
        assertEquals(Optional.of(RejectReason.UNKNOWN_EXPERIMENT), feed(shard, "fare-chip", "plain", 1));
        shard.adopt(entries(true, FARE));
        assertEquals(Optional.empty(), feed(shard, "fare-chip", "plain", 2));
        assertEquals(Optional.empty(), feed(shard, "quay-banner", "plain", 3));
        shard.endOfInput();

        assertEquals(1, outcomes(shard, "fare-chip").get(Outcome.TRIAL));
        assertEquals(1, outcomes(shard, "quay-banner").get(Outcome.TRIAL));
    }

    @Test
    void aPlanThatIsNotFrozenMustBeFrozenBeforeAnEventInsideItsRun() {
        CountShard shard = shard();
        shard.adopt(entries(false, QUAY));
        int quay = shard.names().experiment("quay-banner");

        assertFalse(shard.mustFreeze(quay, Events.at(-1), Events.at(-1)), "an event before the run changes nothing");
        assertTrue(shard.mustFreeze(quay, Events.at(1), Events.at(1)));
        assertFalse(
                shard.mustFreeze(quay, Events.at(30), Events.at(1)), "an event from a clock that is ahead is rejected");
        assertEquals(List.of("quay-banner"), shard.begunUnfrozen(Events.at(1)));
        shard.adopt(entries(true, QUAY));
        assertFalse(shard.mustFreeze(quay, Events.at(1), Events.at(1)));
    }

    @Test
    void eventsOutsideTheRunDoNotKeepAPlanFromChanging() {
        Plan later = Plans.plan("quay-banner").alpha(0.01).build();
        CountShard shard = shard();
        StateLog log = new StateLog();
        shard.adopt(entries(false, QUAY));
        feed(shard, "quay-banner", "plain", -10);
        log.append(shard.drain().state());
        shard.adopt(entries(false, later));
        assertEquals(1, outcomes(shard, "quay-banner").get(Outcome.OUTSIDE));

        CountShard restarted = shard();
        restarted.adopt(entries(true, later));
        log.replayCompacted(0, restarted::restore);
        feed(restarted, "quay-banner", "plain", 1);
        restarted.endOfInput();

        assertEquals(1, outcomes(restarted, "quay-banner").get(Outcome.OUTSIDE));
        assertEquals(1, outcomes(restarted, "quay-banner").get(Outcome.TRIAL));
        assertThrows(PlanChangedException.class, () -> restarted.adopt(entries(true, QUAY)));
    }

    @Test
    void nothingIsSealedOfAPlanThatIsNotFrozenButItIsSaidWhenItIsDue() {
        CountShard shard = shard(FARE);
        shard.adopt(entries(false, QUAY));
        feed(shard, "fare-chip", "plain", 44);
        assertEquals(List.of(), shard.dueToFreeze());
        feed(shard, "fare-chip", "plain", 46);
        assertEquals(List.of("quay-banner"), shard.dueToFreeze());
        assertTrue(shard.drain().tallies().stream()
                .noneMatch(update -> update.experiment().equals("quay-banner")));

        shard.adopt(entries(true, QUAY));
        assertEquals(List.of(), shard.dueToFreeze());
        feed(shard, "fare-chip", "plain", 47);
        assertEquals(
                List.of(Events.at(5)),
                shard.drain().tallies().stream()
                        .filter(update -> update.experiment().equals("quay-banner"))
                        .map(TallyUpdate::sealedUntilMillis)
                        .toList());
    }

    @Test
    void segmentsKeepTheirPlacesWhenFieldsAreAdded() {
        Plan quay = Plans.plan("quay-banner").segments("version").build();
        Plan fare = Plans.plan("fare-chip").segments("platform", "version").build();
        CountShard shard = shard(quay);
        shard.apply(0, Events.at(1), segmented("quay-banner", "a", 1));
        shard.adopt(entries(true, fare));
        shard.apply(0, Events.at(2), segmented("quay-banner", "b", 2));
        shard.apply(0, Events.at(3), segmented("fare-chip", "c", 3));
        shard.endOfInput();
        List<TallyUpdate> tallies = shard.drain().tallies();

        assertEquals(Map.of("version=6.1", 2L), Map.copyOf(segments(tallies, "quay-banner")));
        assertEquals(Map.of("version=6.1", 1L, "platform=web", 1L), Map.copyOf(segments(tallies, "fare-chip")));
    }

    private static Event segmented(String experiment, String unit, double minute) {
        return Events.with(
                Events.view(experiment, "plain", unit, "e-" + unit, minute), "version", "6.1", "platform", "web");
    }

    private static Map<String, Long> segments(List<TallyUpdate> tallies, String experiment) {
        Map<String, Long> units = new TreeMap<>();
        tallies.stream()
                .filter(update -> update.experiment().equals(experiment))
                .flatMap(update -> update.windows().stream())
                .flatMap(window -> window.segments().stream())
                .forEach(cell -> units.merge(cell.field() + "=" + cell.value(), cell.units(), Long::sum));
        return units;
    }

    @Test
    void anAmendmentOfSealedWindowsIsRefused() {
        CountShard shard = shard(QUAY);
        feed(shard, "quay-banner", "plain", 1);
        feed(shard, "quay-banner", "plain", 50);
        Plan amended = QUAY.amended(List.of(new Amendment(
                Plans.FROM.plus(Duration.ofMinutes(5)),
                "ramp",
                new Amendment.Shares(Map.of("plain", 0.2, "wide", 0.8)))));

        assertThrows(LateAmendmentException.class, () -> shard.adopt(entries(true, amended)));
    }

    @Test
    void anAmendmentThatCameTooLateIsRefusedAfterARestartToo() {
        CountShard shard = shard(QUAY);
        StateLog log = new StateLog();
        feed(shard, "quay-banner", "plain", 1);
        feed(shard, "quay-banner", "plain", 60);
        log.append(shard.drain().state());
        CountShard restarted = shard(QUAY.amended(List.of(new Amendment(
                Plans.FROM.plus(Duration.ofMinutes(5)),
                "ramp",
                new Amendment.Shares(Map.of("plain", 0.2, "wide", 0.8))))));

        assertThrows(LateAmendmentException.class, () -> log.replayCompacted(0, restarted::restore));
    }

    @Test
    void anEndThatAnEventLiesBehindIsRefused() {
        CountShard shard = shard(QUAY);
        feed(shard, "quay-banner", "plain", 20);
        Plan stopped = QUAY.amended(
                List.of(new Amendment(Plans.FROM.plus(Duration.ofMinutes(15)), "in the dock", new Amendment.Stop())));

        assertThrows(LateAmendmentException.class, () -> shard.adopt(entries(true, stopped)));
    }

    @Test
    void stateOfAnExperimentWithoutAPlanIsKnownToBeLeftOut() {
        CountShard shard = shard(QUAY);
        StateLog log = new StateLog();
        feed(shard, "quay-banner", "plain", 1);
        log.append(shard.drain().state());
        CountShard early = shard();
        log.replayCompacted(0, early::restore);

        assertEquals(Set.of("quay-banner"), early.unplannedState());
        CountShard restored = shard(QUAY);
        log.replayCompacted(0, restored::restore);
        assertEquals(Set.of(), restored.unplannedState());
    }

    /** Whenever amendments are learnt of, and through restarts: the same counts as if they had been planned. */
    @Test
    void itDoesNotMatterWhenAnAmendmentIsLearntOf() {
        Random random = new Random(20261202);
        for (int seed = 0; seed < 40; seed++) {
            List<Arrival> arrivals = RandomStream.wild(seed, 1);
            List<Plan> plans = RandomStream.plans();
            List<Plan> amended =
                    plans.stream().map(plan -> amended(plan, random)).toList();

            CountHost knowing = new CountHost(0, 1, amended, 1);
            arrivals.forEach(arrival -> knowing.shard().apply(0, arrival.recordTimestamp(), arrival.event()));
            knowing.end();

            CountShard learning = new CountShard(0, 1, plans, CountHost.settings(), List.of("events"));
            StateLog log = new StateLog();
            List<TallyUpdate> tallies = new ArrayList<>();
            List<Plan> now = plans;
            long watermark = Long.MIN_VALUE;
            for (Arrival arrival : arrivals) {
                long next = Math.max(watermark, arrival.event().atMillis());
                now = learnt(now, amended, next, random);
                learning.adopt(entries(true, now.toArray(Plan[]::new)));
                learning.apply(0, arrival.recordTimestamp(), arrival.event());
                watermark = next;
                if (random.nextInt(50) == 0) {
                    CountEffects effects = learning.drain();
                    log.append(effects.state());
                    tallies.addAll(effects.tallies());
                    if (random.nextInt(3) == 0) {
                        learning = new CountShard(0, 1, now, CountHost.settings(), List.of("events"));
                        log.replayCompacted(random.nextInt(log.size() + 1), learning::restore);
                    }
                }
            }
            learning.adopt(entries(true, amended.toArray(Plan[]::new)));
            learning.endOfInput();
            tallies.addAll(learning.drain().tallies());
            for (Plan plan : plans) {
                assertEquals(
                        knowing.counted(plan.experiment()),
                        Counted.of(plan.experiment(), tallies),
                        "seed " + seed + ", " + plan.experiment());
                assertEquals(
                        knowing.outcomes(plan.experiment()),
                        outcomes(learning, plan.experiment()),
                        "seed " + seed + ", " + plan.experiment());
            }
        }
    }

    /** What takes effect before the watermark must be known; the rest may be. */
    private static List<Plan> learnt(List<Plan> now, List<Plan> amended, long watermark, Random random) {
        List<Plan> learnt = new ArrayList<>();
        for (int i = 0; i < now.size(); i++) {
            int known = now.get(i).amendments().size();
            List<Amendment> all = amended.get(i).amendments();
            while (known < all.size()
                    && (all.get(known).at().toEpochMilli() <= watermark || random.nextInt(200) == 0)) {
                known++;
            }
            learnt.add(now.get(i).amended(all.subList(0, known)));
        }
        return learnt;
    }

    private static Plan amended(Plan plan, Random random) {
        long window = plan.count().window().toMinutes();
        Instant ramped = plan.epochs().isEmpty()
                ? plan.run().from()
                : plan.epochs().get(plan.epochs().size() - 1).from();
        long left = Duration.between(ramped, plan.run().end()).toMinutes() / window;
        List<Amendment> amendments = new ArrayList<>();
        long latest = 0;
        while (latest + 2 < left && random.nextInt(4) > 0) {
            latest += 1 + random.nextLong(left - latest - 2);
            Instant at = ramped.plus(Duration.ofMinutes(Math.floorDiv(
                                    Duration.between(plan.run().from(), ramped).toMinutes(), window)
                            * window
                    - Duration.between(plan.run().from(), ramped).toMinutes()
                    + (latest + 1) * window));
            if (!at.isBefore(plan.run().end())) {
                break;
            }
            if (random.nextInt(4) == 0) {
                amendments.add(new Amendment(at, "in the dock", new Amendment.Stop()));
                break;
            }
            Map<String, Double> shares = new TreeMap<>();
            plan.variants()
                    .forEach(variant ->
                            shares.put(variant.name(), 1.0 / plan.variants().size()));
            amendments.add(new Amendment(at, "ramp", new Amendment.Shares(shares)));
        }
        return plan.amended(amendments);
    }
}
