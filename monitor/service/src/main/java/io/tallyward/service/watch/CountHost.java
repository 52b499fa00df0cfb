package io.tallyward.service.watch;

import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.TallyJson;
import io.tallyward.connector.kafka.HostedShard;
import io.tallyward.connector.kafka.Output;
import io.tallyward.engine.count.CountEffects;
import io.tallyward.engine.count.CountShard;
import io.tallyward.engine.count.CountView;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.PlanNames;
import io.tallyward.engine.shard.StateChange;
import io.tallyward.service.book.PlanSnapshot;
import io.tallyward.service.book.PlanSource;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.StatusBoard;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;
import java.util.function.Function;
import java.util.function.Predicate;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/** Hosts a COUNT shard: bytes in, records out. */
final class CountHost implements HostedShard {

    private static final Logger LOG = LoggerFactory.getLogger(CountHost.class);

    /** A rejected record is copied up to this size, so that the copy always fits into a record of its own. */
    private static final int COPIED_BYTES = 256 * 1024;

    /** What a rejected record takes in memory besides its key and value, about. */
    private static final int REJECT_OVERHEAD = 1024;

    private final CountShard shard;
    private final int partition;
    private final List<String> topics;
    private final TopicNames names;
    private final Function<PlanNames, EventParser> parsers;
    private final PlanSource plans;
    private EventParser parser;
    private long planVersion;
    private final EventSlot slot = new EventSlot();
    private final TrafficLog trafficLog;
    private final StatusBoard board;
    private final KeyCheck keyCheck;

    private final List<Output> rejects = new ArrayList<>();
    private long rejectedBytes;

    /** What the last report was made from, and of. */
    private final Map<String, CountView.ExperimentCounts> shown = new HashMap<>();

    private final TreeMap<String, CountReport.ExperimentCount> reported = new TreeMap<>();
    private boolean published;

    CountHost(
            CountShard shard,
            int partition,
            int partitions,
            List<String> topics,
            TopicNames names,
            Function<PlanNames, EventParser> parsers,
            PlanSource plans,
            TrafficLog trafficLog,
            StatusBoard board) {
        this.shard = shard;
        this.partition = partition;
        this.topics = topics;
        this.names = names;
        this.parsers = parsers;
        this.plans = plans;
        this.trafficLog = trafficLog;
        this.board = board;
        keyCheck = new KeyCheck(partition, partitions);
        adopt(plans.catchUp());
    }

    private void adopt(PlanSnapshot snapshot) {
        StalePlans.require(snapshot, shard.unplannedState());
        PlanNames before = shard.names();
        shard.adopt(snapshot.entries().values());
        if (parser == null || shard.names() != before) {
            parser = parsers.apply(shard.names());
        }
        planVersion = snapshot.version();
    }

    private void adoptNews() {
        plans.requireRecent();
        PlanSnapshot snapshot = plans.snapshot();
        if (snapshot.version() != planVersion) {
            adopt(snapshot);
        }
        List<String> due = shard.dueToFreeze();
        if (!due.isEmpty()) {
            adopt(plans.freeze(due));
        }
    }

    @Override
    public int foresight() {
        return shard.foresight();
    }

    @Override
    public void foresee(byte[] key, byte[] value) {
        shard.foresee(key, value);
    }

    @Override
    public void restore(byte[] key, byte[] value) {
        shard.restore(key, value);
    }

    @Override
    public boolean hasRead(String topic) {
        return shard.hasRead(topic);
    }

    @Override
    public void apply(ConsumerRecord<byte[], byte[]> record) {
        boolean usual = isUsual(record);
        if (usual && shard.mustFreeze(slot.experiment(), slot.atMillis(), record.timestamp())) {
            freeze(slot.atMillis());
            usual = isUsual(record);
        }
        if (usual) {
            admit(record, slot);
        } else {
            applyUnusual(record);
        }
    }

    private boolean isUsual(ConsumerRecord<byte[], byte[]> record) {
        try {
            return parser.read(record.value(), slot);
        } catch (RuntimeException unexpected) {
            return false;
        }
    }

    /** Freezes the plans of all runs that have begun by then; an event may mean something else than before. */
    private void freeze(long atMillis) {
        adopt(plans.freeze(shard.begunUnfrozen(atMillis)));
    }

    private void admit(ConsumerRecord<byte[], byte[]> record, EventSlot event) {
        Optional<RejectReason> rejected = shard.apply(topics.indexOf(record.topic()), record.timestamp(), event);
        if (rejected.isPresent()) {
            String detail = parse(record) instanceof Decoded.Accepted read
                    ? RejectDetail.of(rejected.get(), read.event(), record.timestamp())
                    : rejected.get().code();
            reject(record, rejected.get(), detail);
        } else {
            observeKey(record, event.unit(), event.unitLength());
        }
    }

    /** A document that has to be looked at more closely, most often because there is something wrong with it. */
    private void applyUnusual(ConsumerRecord<byte[], byte[]> record) {
        Decoded decoded = parse(record);
        if (decoded instanceof Decoded.Refused refused) {
            reject(record, shard.reject(refused.reason()), refused.detail());
        } else if (decoded instanceof Decoded.Accepted accepted) {
            admit(record, accepted.event());
        }
    }

    /** Whatever a record does to the parser, it is the record that is set aside and not the worker. */
    private Decoded parse(ConsumerRecord<byte[], byte[]> record) {
        try {
            return parser.read(record.value());
        } catch (RuntimeException unexpected) {
            String failure = unexpected.getClass().getSimpleName();
            trafficLog.parserFailed(origin(record), failure);
            // Its message may quote the record, and the unit with it.
            return new Decoded.Refused(RejectReason.UNPARSABLE, "the parser failed with " + failure);
        }
    }

    private static String origin(ConsumerRecord<byte[], byte[]> record) {
        return record.topic() + "-" + record.partition() + "@" + record.offset();
    }

    private void admit(ConsumerRecord<byte[], byte[]> record, Event event) {
        int experiment = shard.names().experiment(event.experiment());
        if (experiment >= 0 && shard.mustFreeze(experiment, event.atMillis(), record.timestamp())) {
            freeze(event.atMillis());
        }
        Optional<RejectReason> rejected = shard.apply(topics.indexOf(record.topic()), record.timestamp(), event);
        if (rejected.isPresent()) {
            reject(record, rejected.get(), RejectDetail.of(rejected.get(), event, record.timestamp()));
        } else {
            byte[] unit = utf8(event.unit());
            observeKey(record, unit, unit.length);
        }
    }

    private void observeKey(ConsumerRecord<byte[], byte[]> record, byte[] unit, int unitLength) {
        if (keyCheck.observe(record.key(), unit, unitLength)) {
            trafficLog.keying(record.topic(), !keyCheck.unkeyed());
        }
    }

    private void reject(ConsumerRecord<byte[], byte[]> record, RejectReason reason, String detail) {
        String origin = origin(record);
        trafficLog.rejected(origin, reason, detail);
        Map<String, byte[]> headers = new TreeMap<>();
        headers.put("tallyward-reason", utf8(reason.code()));
        headers.put("tallyward-detail", utf8(detail));
        headers.put("tallyward-origin", utf8(origin));
        byte[] value = record.value();
        if (value != null && value.length > COPIED_BYTES) {
            headers.put("tallyward-full-size", utf8(Integer.toString(value.length)));
            value = Arrays.copyOf(value, COPIED_BYTES);
        }
        byte[] key = record.key();
        if (key != null && key.length > COPIED_BYTES) {
            key = Arrays.copyOf(key, COPIED_BYTES);
        }
        rejectedBytes += REJECT_OVERHEAD + (value == null ? 0 : value.length) + (key == null ? 0 : key.length);
        rejects.add(new Output(names.rejects(), partition, key, value, headers));
    }

    @Override
    public long pendingBytes() {
        return rejectedBytes;
    }

    private static byte[] utf8(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }

    @Override
    public void passTime(long nowMillis, Predicate<String> caughtUp) {
        adoptNews();
        for (int source = 0; source < topics.size(); source++) {
            shard.passTime(source, nowMillis, caughtUp.test(topics.get(source)));
        }
    }

    @Override
    public List<Output> drain() {
        CountEffects effects = shard.drain();
        List<Output> outputs = new ArrayList<>(rejects);
        rejects.clear();
        rejectedBytes = 0;
        for (StateChange change : effects.state()) {
            outputs.add(Output.state(names.countState(), partition, change.key(), change.value()));
        }
        for (TallyUpdate update : effects.tallies()) {
            outputs.add(new Output(
                    names.tallies(),
                    TopicNames.partitionOf(update.experiment()),
                    utf8(update.experiment()),
                    TallyJson.write(update),
                    Map.of()));
        }
        return outputs;
    }

    @Override
    public void committed() {
        if (published) {
            board.publishCounts(partition, report());
        } else {
            LOG.info("Counting partition {}", partition);
            board.adoptCounts(partition, report());
            published = true;
        }
    }

    @Override
    public void released() {
        if (published) {
            LOG.info("No longer counting partition {}", partition);
        }
        board.withdrawCount(partition);
    }

    private CountReport report() {
        CountView view = shard.view();
        long units = 0;
        for (Map.Entry<String, CountView.ExperimentCounts> entry :
                view.experiments().entrySet()) {
            CountView.ExperimentCounts counts = entry.getValue();
            if (shown.put(entry.getKey(), counts) != counts) {
                reported.put(entry.getKey(), new CountReport.ExperimentCount(counts.outcomes(), counts.openEvents()));
            }
            units += counts.units();
        }
        return new CountReport(reported, view.watermarkMillis(), view.rejected(), units, keyCheck.unkeyed());
    }
}
