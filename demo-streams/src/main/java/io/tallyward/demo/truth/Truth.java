package io.tallyward.demo.truth;

import io.tallyward.demo.story.Flaw;
import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.story.StreamEvent;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import org.apache.kafka.common.utils.Utils;

/** The right counts of a scenario: of every experiment, and of the records that must be rejected. */
public final class Truth {

    private final int partitions;
    private final long[] latestMillis;
    private final Map<String, ExperimentTruth> experiments;
    private final Map<String, Long> rejects;

    Truth(int partitions, long[] latestMillis, Map<String, Long> rejects) {
        this.partitions = partitions;
        this.latestMillis = latestMillis.clone();
        this.rejects = Map.copyOf(rejects);
        experiments = new LinkedHashMap<>();
    }

    /** Judges every event of a scenario whose units are spread over a number of partitions. Takes about two seconds. */
    public static Truth of(Scenario scenario, int partitions) {
        Map<String, Story> stories = new LinkedHashMap<>();
        Map<String, Map<String, List<StreamEvent>>> byUnit = new HashMap<>();
        for (Story story : scenario.stories()) {
            stories.put(story.experiment(), story);
            byUnit.put(story.experiment(), new HashMap<>());
        }
        TruthKeeper keeper = new TruthKeeper(scenario.stories(), partitions);
        for (StreamEvent event : scenario.events()) {
            if (event.flaw() != Flaw.NONE) {
                keeper.flawed(event);
                continue;
            }
            byUnit.get(event.subject().experiment())
                    .computeIfAbsent(event.subject().unit(), unit -> new ArrayList<>(4))
                    .add(event);
        }
        stories.forEach((name, story) -> byUnit.get(name).values().forEach(events -> keeper.unit(story, events)));
        return keeper.truth();
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

    void add(ExperimentTruth experiment) {
        experiments.put(experiment.story().experiment(), experiment);
    }
}
