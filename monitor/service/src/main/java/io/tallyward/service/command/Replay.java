package io.tallyward.service.command;

import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.connector.kafka.KeyPartitions;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.count.CountShard;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.EnumMap;
import java.util.List;
import java.util.Map;
import java.util.SortedMap;
import java.util.TreeMap;

/**
 * Counts and decides over a finite stream of events, with the shards that the service runs and nothing else: no broker, no
 * clock. Memory grows with units and windows, not with events.
 */
final class Replay {

    /** How many events are taken between two drains; any number gives the same results. */
    private static final int EVENTS_PER_DRAIN = 10_000;

    /** Keeps the hosts' one input topic. */
    private static final int SOURCE = 0;

    private final SortedMap<String, Plan> plans = new TreeMap<>();
    private final List<CountShard> counting = new ArrayList<>();
    private final DecideShard deciding;
    private final JsonEventReader reader;
    private final Map<RejectReason, Long> rejected = new EnumMap<>(RejectReason.class);
    private final SortedMap<WindowKey, long[][]> windows = new TreeMap<>();
    private final List<DecisionRecord> decisions = new ArrayList<>();
    private long events;

    /** A replay over {@code partitions} partitions; the events of a unit always meet in one. */
    Replay(List<Plan> plans, int partitions, CountSettings settings, JsonEventReader reader) {
        plans.forEach(plan -> this.plans.put(plan.experiment(), plan));
        for (int partition = 0; partition < partitions; partition++) {
            counting.add(new CountShard(partition, partitions, plans, settings, 1));
        }
        this.deciding = new DecideShard(plans);
        this.reader = reader;
        for (RejectReason reason : RejectReason.values()) {
            rejected.put(reason, 0L);
        }
    }

    /** Takes the next record. */
    void take(byte[] line) {
        events++;
        Decoded decoded = reader.read(line);
        if (decoded instanceof Decoded.Refused refused) {
            reject(refused.reason());
        } else if (decoded instanceof Decoded.Accepted accepted) {
            Event event = accepted.event();
            long timestamp = accepted.receivedMillis().orElse(event.atMillis());
            shardOf(event.unit()).apply(SOURCE, timestamp, event).ifPresent(this::reject);
        }
        if (events % EVENTS_PER_DRAIN == 0) {
            drain();
        }
    }

    /**
     * Seals everything: there are no more records. Time ends with the last event of an experiment, or with its run if any
     * event came after that, so that the end of a file is not taken for silence.
     */
    void end() {
        Map<String, Long> farthest = new TreeMap<>();
        for (CountShard shard : counting) {
            shard.reach().forEach((experiment, moment) -> farthest.merge(experiment, moment, Math::max));
        }
        counting.forEach(shard -> shard.endOfInput(farthest));
        drain();
    }

    private CountShard shardOf(String unit) {
        byte[] key = unit.getBytes(StandardCharsets.UTF_8);
        return counting.get(KeyPartitions.partitionOf(key, counting.size()));
    }

    private void reject(RejectReason reason) {
        rejected.merge(reason, 1L, Long::sum);
    }

    private void drain() {
        for (CountShard shard : counting) {
            for (TallyUpdate tally : shard.drain().tallies()) {
                deciding.apply(tally);
                add(tally);
            }
        }
        decisions.addAll(deciding.drain().decisions());
    }

    private void add(TallyUpdate tally) {
        int variants = plans.get(tally.experiment()).variants().size();
        for (WindowTally window : tally.windows()) {
            for (WindowTally.Cell cell : window.cells()) {
                WindowKey key = new WindowKey(tally.experiment(), cell.epoch(), window.startMillis());
                long[] counts = windows.computeIfAbsent(key, absent -> new long[variants][2])[cell.variant()];
                counts[0] += cell.trials();
                counts[1] += cell.successes();
            }
        }
    }

    /** The plans by experiment, in the order of the names. */
    SortedMap<String, Plan> plans() {
        return plans;
    }

    /** How many records there were. */
    long events() {
        return events;
    }

    /** Rejected records by reason; every reason is present. */
    Map<RejectReason, Long> rejected() {
        return rejected;
    }

    /** Trials and successes of every variant, in the plan's order, of each window with a trial. */
    SortedMap<WindowKey, long[][]> windows() {
        return windows;
    }

    /** What became of the admitted events of an experiment. */
    OutcomeCounts outcomes(String experiment) {
        OutcomeCounts outcomes = OutcomeCounts.NONE;
        for (CountShard shard : counting) {
            outcomes = outcomes.plus(shard.view().experiments().get(experiment).outcomes());
        }
        return outcomes;
    }

    /** All decision records: by experiment in the order of the names, then in the order they were taken. */
    List<DecisionRecord> decisions() {
        return decisions.stream()
                .sorted(Comparator.comparing(DecisionRecord::experiment).thenComparingInt(DecisionRecord::sequence))
                .toList();
    }

    /** Where the experiments stand at the end, by name. */
    Map<String, ExperimentView> views() {
        return deciding.views();
    }

    /**
     * One window of one experiment, in the order they are listed.
     *
     * @param experiment name of the experiment
     * @param epoch index of the allocation epoch
     * @param startMillis start of the window, milliseconds since the epoch
     */
    record WindowKey(String experiment, int epoch, long startMillis) implements Comparable<WindowKey> {
        @Override
        public int compareTo(WindowKey other) {
            int order = experiment.compareTo(other.experiment);
            order = order != 0 ? order : Integer.compare(epoch, other.epoch);
            return order != 0 ? order : Long.compare(startMillis, other.startMillis);
        }
    }
}
