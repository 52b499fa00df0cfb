package io.tallyward.service.command;

import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.connector.format.Quoted;
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
import io.tallyward.service.config.document.ScalarType;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Map;
import java.util.SortedMap;
import java.util.TreeMap;

/**
 * Counts and decides over a finite stream of events, with the shards that the service runs and nothing else: no broker, no
 * clock. Memory grows with units and windows, not with events.
 */
final class Replay {

    /** Longer records are rejected; of such a record no more than this and one byte need be given. */
    static final int MAX_EVENT_BYTES = 65_536;

    /** How many events are taken between two drains; any number gives the same results. */
    private static final int EVENTS_PER_DRAIN = 10_000;

    /** Keeps the hosts' one input topic. */
    private static final int SOURCE = 0;

    private final SortedMap<String, Plan> plans = new TreeMap<>();
    private final List<CountShard> counting = new ArrayList<>();
    private final DecideShard deciding;
    private final JsonEventReader reader;
    private final String maxSkew;
    private final Rejections rejections = new Rejections();
    private final SortedMap<WindowKey, long[][]> windows = new TreeMap<>();
    private final List<DecisionRecord> decisions = new ArrayList<>();
    private long events;

    /** A replay over {@code partitions} partitions; the events of a unit always meet in one. */
    Replay(List<Plan> plans, int partitions, CountSettings settings) {
        plans.forEach(plan -> this.plans.put(plan.experiment(), plan));
        for (int partition = 0; partition < partitions; partition++) {
            counting.add(new CountShard(partition, partitions, plans, settings, List.of("events")));
        }
        this.deciding = new DecideShard(plans);
        this.reader = new JsonEventReader(EventMapping.DEFAULT, MAX_EVENT_BYTES);
        this.maxSkew = ScalarType.written(settings.maxSkew());
    }

    /**
     * Takes the next record.
     *
     * @param value the bytes of the record
     * @param line where it stands in the file, from 1
     */
    void take(byte[] value, long line) {
        events++;
        Decoded decoded = reader.read(value);
        if (decoded instanceof Decoded.Refused refused) {
            boolean cut = value.length > MAX_EVENT_BYTES;
            String detail = cut ? "the record has more than " + MAX_EVENT_BYTES + " bytes" : refused.detail();
            rejections.add(refused.reason(), line, detail);
        } else if (decoded instanceof Decoded.Accepted accepted) {
            Event event = accepted.event();
            long timestamp = accepted.receivedMillis().orElse(event.atMillis());
            shardOf(event.unit())
                    .apply(SOURCE, timestamp, event)
                    .ifPresent(reason -> rejections.add(reason, line, detail(reason, event, timestamp)));
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

    /** What a shard has against a record that is an event. */
    private String detail(RejectReason reason, Event event, long timestampMillis) {
        return switch (reason) {
            case UNKNOWN_EXPERIMENT -> "no plan names the experiment " + Quoted.of(event.experiment());
            case UNKNOWN_VARIANT ->
                "the plan of " + event.experiment() + " has no variant " + Quoted.of(event.variant());
            case BAD_TIME ->
                "the event time " + Instant.ofEpochMilli(event.atMillis()) + " lies more than " + maxSkew
                        + " ahead of its receipt at " + Instant.ofEpochMilli(timestampMillis);
            case UNPARSABLE, MISSING_FIELD, OVERSIZED -> "the event cannot be counted";
        };
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

    /** The records that were rejected. */
    Rejections rejections() {
        return rejections;
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
