package io.tallyward.service.watch;

import io.tallyward.connector.format.DecisionJson;
import io.tallyward.connector.format.NoticeJson;
import io.tallyward.connector.format.TallyJson;
import io.tallyward.connector.kafka.Filler;
import io.tallyward.connector.kafka.HostedShard;
import io.tallyward.connector.kafka.Output;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.decide.DecideEffects;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.shard.StateChange;
import io.tallyward.service.book.PlanSnapshot;
import io.tallyward.service.book.PlanSource;
import io.tallyward.service.status.StatusBoard;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.HashSet;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.function.Predicate;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/** Hosts a DECIDE shard: tallies in, decision records and notices out. */
final class DecideHost implements HostedShard {

    private static final Logger LOG = LoggerFactory.getLogger(DecideHost.class);

    private final DecideShard shard;
    private final PlanSource plans;
    private final int partition;
    private final TopicNames names;
    private final StatusBoard board;
    private final Set<String> saidUnplanned = new HashSet<>();
    private final List<DecisionRecord> fresh = new ArrayList<>();
    private final Set<String> missing = new HashSet<>();
    private long planVersion;
    private long refusalsVersion = -1;

    DecideHost(DecideShard shard, PlanSource plans, int partition, TopicNames names, StatusBoard board) {
        this.shard = shard;
        this.plans = plans;
        this.partition = partition;
        this.names = names;
        this.board = board;
        adopt(plans.catchUp());
    }

    /** Of the experiments that are found in this partition of the tallies. */
    private void adopt(PlanSnapshot snapshot) {
        StalePlans.require(snapshot, shard.unplannedState());
        List<PlanBook.Entry> own = snapshot.entries().values().stream()
                .filter(entry -> TopicNames.partitionOf(entry.plan().experiment()) == partition)
                .toList();
        shard.adopt(own);
        own.forEach(entry -> shard.expect(entry.plan().experiment()));
        planVersion = snapshot.version();
        missing.clear();
    }

    @Override
    public void restore(byte[] key, byte[] value) {
        shard.restore(key, value);
    }

    @Override
    public void apply(ConsumerRecord<byte[], byte[]> record) {
        if (Filler.is(record)) {
            return;
        }
        TallyUpdate update = TallyJson.read(record.value());
        if (!missing.contains(update.experiment())
                && !shard.planDigest(update.experiment()).equals(Optional.of(update.planDigest()))) {
            // Whoever counted it knew more of the book.
            adopt(plans.catchUp());
            missing.add(update.experiment());
        }
        shard.apply(update);
        for (String experiment : shard.unplanned().keySet()) {
            if (saidUnplanned.add(experiment)) {
                LOG.warn(
                        "Tallies of {} arrive, but no plan here is named so: they are set aside. The book of plans has been"
                                + " removed: put it back, or start under a new name.",
                        experiment);
            }
        }
    }

    @Override
    public void passTime(long nowMillis, Predicate<String> caughtUp) {
        // A decision depends on complete windows and the book of plans only, never on the clock.
        plans.requireRecent();
        PlanSnapshot snapshot = plans.snapshot();
        if (snapshot.version() != planVersion) {
            adopt(snapshot);
        }
        if (refusalsVersion != snapshot.version()) {
            // Not before what was told is restored.
            snapshot.refusals().forEach(shard::refuse);
            refusalsVersion = snapshot.version();
        }
    }

    @Override
    public List<Output> drain() {
        DecideEffects effects = shard.drain();
        List<Output> outputs = new ArrayList<>();
        for (StateChange change : effects.state()) {
            outputs.add(Output.state(names.decideState(), partition, change.key(), change.value()));
        }
        for (DecisionRecord decision : effects.decisions()) {
            outputs.add(output(names.decisions(), decision.experiment(), DecisionJson.write(decision)));
            fresh.add(decision);
        }
        for (Notice notice : effects.notices()) {
            outputs.add(output(names.notices(), notice.experiment(), NoticeJson.write(notice)));
        }
        return outputs;
    }

    private Output output(String topic, String experiment, byte[] value) {
        return new Output(topic, partition, experiment.getBytes(StandardCharsets.UTF_8), value, Map.of());
    }

    @Override
    public void committed() {
        for (DecisionRecord decision : fresh) {
            LOG.info(
                    "{}: record {}, {}, up to {}: verdict {}, trust {}",
                    decision.experiment(),
                    decision.sequence(),
                    decision.occasion().code(),
                    decision.windowEnd(),
                    decision.verdict().code(),
                    decision.trust().code());
        }
        fresh.clear();
        board.publishExperiments(partition, shard.views());
    }

    @Override
    public void released() {
        board.withdrawDecide(partition);
    }
}
