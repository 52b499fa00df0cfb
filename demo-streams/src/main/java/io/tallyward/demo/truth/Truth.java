package io.tallyward.demo.truth;

import io.tallyward.demo.story.Flaw;
import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.story.StreamEvent;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.HashMap;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import org.apache.kafka.common.utils.Utils;

/** The right counts of a scenario: of every experiment, and of the records that must be rejected. */
public final class Truth {

    private final int partitions;
    private final long[] latestMillis;
    private final Map<String, ExperimentTruth> experiments = new LinkedHashMap<>();
    private final Map<String, Long> rejects = new HashMap<>();

    private Truth(int partitions) {
        this.partitions = partitions;
        latestMillis = new long[partitions];
        Arrays.fill(latestMillis, Long.MIN_VALUE);
    }

    /** Judges every event of a scenario whose units are spread over a number of partitions. Takes about two seconds. */
    public static Truth of(Scenario scenario, int partitions) {
        Truth truth = new Truth(partitions);
        Map<String, Story> stories = new LinkedHashMap<>();
        Map<String, Map<String, List<StreamEvent>>> byUnit = new HashMap<>();
        for (Story story : scenario.stories()) {
            stories.put(story.experiment(), story);
            byUnit.put(story.experiment(), new HashMap<>());
        }
        for (StreamEvent event : scenario.events()) {
            if (event.flaw() != Flaw.NONE) {
                truth.rejects.merge(event.flaw().reason(), 1L, Long::sum);
                continue;
            }
            String experiment = event.subject().experiment();
            truth.noteTime(stories.get(experiment), event);
            byUnit.get(experiment)
                    .computeIfAbsent(event.subject().unit(), unit -> new ArrayList<>(4))
                    .add(event);
        }
        stories.forEach((name, story) -> truth.experiments.put(name, truth.judge(story, byUnit.get(name))));
        return truth;
    }

    /** The partition of a unit: Kafka's own choice for a record whose key is the unit in UTF-8. */
    public static int partition(String unit, int partitions) {
        return Utils.toPositive(Utils.murmur2(unit.getBytes(StandardCharsets.UTF_8))) % partitions;
    }

    public int partitions() {
        return partitions;
    }

    /** The experiments by name, in the order of the scenario. */
    public Map<String, ExperimentTruth> experiments() {
        return Map.copyOf(experiments);
    }

    /** How many records must be rejected, by published reason. */
    public Map<String, Long> rejects() {
        return Map.copyOf(rejects);
    }

    /** Every window that ends at or before this moment must be sealed in the partition once the stream has been read. */
    public long sealedUntilMillis(int partition) {
        long delay = Northwater.ATTRIBUTION.plus(Northwater.GRACE).toMillis();
        return Northwater.windowStart(latestMillis[partition] - delay);
    }

    /** Every window that ends at or before this moment must be sealed in all partitions. */
    public long completeUntilMillis() {
        long least = Long.MAX_VALUE;
        for (int partition = 0; partition < partitions; partition++) {
            least = Math.min(least, sealedUntilMillis(partition));
        }
        return least;
    }

    private void noteTime(Story story, StreamEvent event) {
        if (story.runsAt(event.atMillis())) {
            int partition = partition(event.subject().unit(), partitions);
            latestMillis[partition] = Math.max(latestMillis[partition], event.atMillis());
        }
    }

    private ExperimentTruth judge(Story story, Map<String, List<StreamEvent>> byUnit) {
        Map<Cell, Count> cells = new HashMap<>();
        long[] fates = new long[Fate.values().length];
        byUnit.forEach((unit, events) -> {
            UnitVerdict verdict = UnitVerdict.of(story, events);
            verdict.fates().forEach(fate -> fates[fate.ordinal()]++);
            verdict.firstView().ifPresent(view -> {
                Cell cell = cell(story, view);
                if (cell.windowStartMillis() < sealedUntilMillis(cell.partition())) {
                    cells.merge(cell, new Count(1, verdict.success() ? 1 : 0), Count::plus);
                } else {
                    fates[Fate.TRIAL.ordinal()]--;
                }
            });
        });
        Map<String, Long> outcomes = new HashMap<>();
        for (Fate fate : Fate.values()) {
            outcomes.put(fate.code(), fates[fate.ordinal()]);
        }
        return new ExperimentTruth(story, cells, outcomes);
    }

    private Cell cell(Story story, StreamEvent view) {
        return new Cell(
                partition(view.subject().unit(), partitions),
                Northwater.windowStart(view.atMillis()),
                story.epochAt(view.atMillis()),
                story.variants().indexOf(view.subject().variant()));
    }
}
