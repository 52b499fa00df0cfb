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
import io.tallyward.service.command.Rejections.Origin;
import io.tallyward.service.config.document.ScalarType;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.SortedMap;
import java.util.TreeMap;
import org.apache.kafka.clients.consumer.ConsumerRecord;

/**
 * Counts and decides over a finite stream of records, with the shards that the service runs and nothing else: no clock, no
 * side effects. Memory grows with units and windows, not with events.
 */
final class Replay {

    /** Longer lines of a file are rejected; of such a line no more than this and one byte need be given. */
    static final int MAX_EVENT_BYTES = 65_536;

    /** A replay forgets its units at its end, so their hash needs no secret. */
    static final byte[] UNIT_KEY = "replay".getBytes(StandardCharsets.UTF_8);

    /** How many events are taken between two drains; any number gives the same results. */
    private static final int EVENTS_PER_DRAIN = 10_000;

    private final SortedMap<String, Plan> plans = new TreeMap<>();
    private final List<CountShard> counting = new ArrayList<>();
    private final DecideShard deciding;
    private final JsonEventReader reader;
    private final int maxEventBytes;
    private final String maxSkew;
    private final Rejections rejections = new Rejections();
    private final SortedMap<WindowKey, long[][]> windows = new TreeMap<>();
    private final List<DecisionRecord> decisions = new ArrayList<>();
    private long events;
    private boolean sealed;

    /**
     * A replay that has taken nothing yet.
     *
     * @param plans the plans to count under, one per experiment
     * @param partitions as many the input has
     * @param sources the input topics
     * @param settings settings of the stream
     * @param mapping where the fields of an event lie in a record
     * @param maxEventBytes longer records are rejected
     */
    Replay(
            List<Plan> plans,
            int partitions,
            List<String> sources,
            CountSettings settings,
            EventMapping mapping,
            int maxEventBytes) {
        plans.forEach(plan -> this.plans.put(plan.experiment(), plan));
        for (int partition = 0; partition < partitions; partition++) {
            counting.add(new CountShard(partition, partitions, plans, settings, sources));
        }
        this.deciding = new DecideShard(plans);
        this.reader = new JsonEventReader(mapping, maxEventBytes);
        this.maxEventBytes = maxEventBytes;
        this.maxSkew = ScalarType.written(settings.maxSkew());
    }

    /**
     * Takes the next line of a file: received when it says so, and in the partition that its unit has as a key.
     *
     * @param value the bytes of the line
     * @param file the file, as the user named it
     * @param line where it stands in the file, from 1
     */
    void take(byte[] value, String file, long line) {
        Origin origin = new Origin(file, line);
        event(value, origin).ifPresent(accepted -> {
            Event event = accepted.event();
            long timestamp = accepted.receivedMillis().orElse(event.atMillis());
            apply(shardOf(event.unit()), 0, timestamp, event, origin);
        });
        drainNowAndThen();
    }

    /**
     * Takes the next record of a partition.
     *
     * @param source which of the input topics it is from
     */
    void take(ConsumerRecord<byte[], byte[]> record, int source) {
        Origin origin = new Origin(record.topic() + "-" + record.partition() + "@" + record.offset(), 0);
        event(record.value(), origin)
                .ifPresent(accepted ->
                        apply(counting.get(record.partition()), source, record.timestamp(), accepted.event(), origin));
        drainNowAndThen();
    }

    private Optional<Decoded.Accepted> event(byte[] value, Origin origin) {
        events++;
        Decoded decoded = reader.read(value);
        if (decoded instanceof Decoded.Refused refused) {
            boolean cut = value != null && value.length > maxEventBytes;
            String detail = cut ? "the record has more than " + maxEventBytes + " bytes" : refused.detail();
            rejections.add(refused.reason(), origin, detail);
        }
        return decoded instanceof Decoded.Accepted accepted ? Optional.of(accepted) : Optional.empty();
    }

    private void apply(CountShard shard, int source, long timestamp, Event event, Origin origin) {
        shard.apply(source, timestamp, event)
                .ifPresent(reason -> rejections.add(reason, origin, detail(reason, event, timestamp)));
    }

    private void drainNowAndThen() {
        if (events % EVENTS_PER_DRAIN == 0) {
            drain();
        }
    }

    /** Ends with what is sealed: more records may follow these, and the service has decided no further than this either. */
    void finish() {
        drain();
    }

    /**
     * Ends with everything sealed: there are no more records. Time ends with the last event of an experiment, or with its run
     * if any event came after that, so that the end of a file is not taken for silence.
     */
    void seal() {
        Map<String, Long> farthest = new TreeMap<>();
        for (CountShard shard : counting) {
            shard.reach().forEach((experiment, moment) -> farthest.merge(experiment, moment, Math::max));
        }
        counting.forEach(shard -> shard.endOfInput(farthest));
        sealed = true;
        drain();
    }

    /** Whether windows were sealed that more records might still have changed. */
    boolean sealed() {
        return sealed;
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
