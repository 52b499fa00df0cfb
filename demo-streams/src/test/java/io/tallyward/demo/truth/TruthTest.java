package io.tallyward.demo.truth;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.demo.story.Flaw;
import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.story.StreamEvent;
import io.tallyward.demo.story.ToldScenario;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.HashMap;
import java.util.Map;
import java.util.function.Function;
import java.util.stream.Collectors;
import org.apache.kafka.clients.producer.internals.BuiltInPartitioner;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class TruthTest {

    private static final int PARTITIONS = 4;

    private static final Truth TRUTH = Truth.of(ToldScenario.withDefaultSeed(), PARTITIONS);

    private final Scenario scenario = ToldScenario.withDefaultSeed();
    private final Truth truth = TRUTH;

    @Test
    void outcomesAndRejectsAddUpToTheEvents() {
        long unsealed = scenario.events().stream()
                .filter(event -> event.flaw() == Flaw.NONE)
                .filter(event -> event.atMillis()
                        >= truth.sealedUntilMillis(
                                Truth.partition(event.subject().unit(), PARTITIONS)))
                .filter(event -> event.subject().experiment().equals("deck-map"))
                .count();
        long settled = truth.experiments().values().stream()
                .flatMap(experiment -> experiment.outcomes().values().stream())
                .mapToLong(Long::longValue)
                .sum();
        long rejected =
                truth.rejects().values().stream().mapToLong(Long::longValue).sum();
        assertEquals(scenario.events().size(), settled + rejected + unsealed);
    }

    @Test
    void cellsAddUpToTheOutcomes() {
        truth.experiments().forEach((name, experiment) -> {
            Count sum = experiment.cells().values().stream().reduce(Count.NONE, Count::plus);
            assertEquals(experiment.outcomes().get("trial"), sum.trials(), name);
            assertEquals(experiment.outcomes().get("success"), sum.successes(), name);
        });
    }

    @Test
    void everyOutcomeOccursInEveryExperiment() {
        truth.experiments()
                .forEach((name, experiment) -> experiment.outcomes().forEach((outcome, events) -> {
                    boolean none = (outcome.equals("outside") && name.equals("deck-map") && events == 0)
                            || (outcome.equals("duplicate")
                                    && !experiment.story().countsByView()
                                    && events == 0);
                    assertTrue(events > 10 || none, () -> name + " " + outcome + ": " + events);
                }));
    }

    @Test
    void crossoversAndLateEventsStayFarBelowTwoPerCent() {
        truth.experiments().forEach((name, experiment) -> {
            long all = experiment.outcomes().values().stream()
                    .mapToLong(Long::longValue)
                    .sum();
            assertTrue(experiment.outcomes().get("crossover") < 0.007 * all, name);
            assertTrue(experiment.outcomes().get("late") < 0.007 * all, name);
        });
    }

    @Test
    void everyWindowOfTheFourteenDaysIsSealedByEventTime() {
        long sealed = truth.completeUntilMillis();
        assertTrue(sealed >= Northwater.END.plus(Duration.ofHours(2)).toEpochMilli(), () -> "sealed until " + sealed);
    }

    @ParameterizedTest
    @ValueSource(longs = {Scenario.DEFAULT_SEED, 7, 424_242})
    void agreesWithAReadingInTheOrderOfArrival(long seed) {
        Scenario told = seed == scenario.seed() ? scenario : Scenario.of(seed);
        Truth toldTruth = seed == scenario.seed() ? truth : Truth.of(told, PARTITIONS);
        Map<String, Story> stories = told.stories().stream()
                .filter(story -> !story.countsByView())
                .collect(Collectors.toMap(Story::experiment, Function.identity()));
        ArrivalOrderCount count = new ArrivalOrderCount(stories, PARTITIONS);
        told.events().forEach(count::read);
        Map<String, Map<Cell, Count>> cells = count.settle();
        stories.forEach((name, story) -> {
            ExperimentTruth experiment = toldTruth.experiments().get(name);
            assertEquals(experiment.cells(), cells.get(name), () -> "seed " + seed + ", " + name);
            for (Fate fate : Fate.values()) {
                assertEquals(
                        experiment.outcomes().get(fate.code()),
                        count.fate(name, fate),
                        () -> "seed " + seed + ", " + name + " " + fate.code());
            }
        });
    }

    @Test
    void lateEventsFindTheirPartitionHoursAhead() {
        long[] latest = new long[PARTITIONS];
        for (StreamEvent event : scenario.events()) {
            int partition = Truth.partition(event.subject().unit(), PARTITIONS);
            long behind = latest[partition] - event.atMillis();
            if (event.late()) {
                assertTrue(behind > Duration.ofMinutes(150).toMillis(), () -> event + " is only " + behind + " behind");
            } else if (event.flaw() == Flaw.NONE && event.atMillis() >= Northwater.START.toEpochMilli()) {
                assertTrue(behind < Duration.ofMinutes(10).toMillis(), () -> event + " is " + behind + " behind");
            }
            if (event.flaw() == Flaw.NONE && event.atMillis() < Northwater.STREAM_END.toEpochMilli()) {
                latest[partition] = Math.max(latest[partition], event.atMillis());
            }
        }
    }

    /** Oracle: the partitioner inside Kafka's producer. */
    @Test
    void placesUnitsWhereKafkaDoesAndSpreadsThemEvenly() {
        Map<Integer, Integer> units = new HashMap<>();
        for (StreamEvent event : scenario.events()) {
            String unit = event.subject().unit();
            int partition = Truth.partition(unit, PARTITIONS);
            assertEquals(
                    BuiltInPartitioner.partitionForKey(unit.getBytes(StandardCharsets.UTF_8), PARTITIONS), partition);
            units.merge(partition, 1, Integer::sum);
        }
        assertEquals(PARTITIONS, units.size());
        units.values().forEach(events -> assertTrue(events > scenario.events().size() / 5, units::toString));
    }
}
