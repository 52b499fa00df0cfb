package io.tallyward.engine.decide;

import static io.tallyward.engine.shard.Packing.pack;

import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.shard.StateChange;
import java.io.ByteArrayInputStream;
import java.io.DataInputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.util.ArrayList;
import java.util.Collection;
import java.util.HashMap;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.TreeSet;

/**
 * Decides about the experiments whose tallies reach it. A pure state machine; not thread-safe.
 *
 * <p>Its durable form has three kinds of entry, told apart by the first byte of the key: where an experiment stands, one
 * entry each, rewritten; the windows that are not complete yet, one entry each, removed once they are; and the looks
 * taken, one entry each, written once.
 */
public final class DecideShard {

    private static final byte EXPERIMENT = 'd';
    private static final byte WINDOW = 'p';
    private static final byte LOOK = 'l';

    private final DecisionMemo memo;
    private final Detail detail;
    private final Map<String, Plan> plans = new LinkedHashMap<>();
    private final Map<String, ExperimentDecider> deciders = new LinkedHashMap<>();
    private final Map<String, Long> unplanned = new HashMap<>();
    private final Set<String> unplannedState = new TreeSet<>();
    private final Map<String, String> digests = new HashMap<>();

    /**
     * A shard that has decided nothing yet.
     *
     * @param plans the plans to decide under, one per experiment
     */
    public DecideShard(Collection<Plan> plans) {
        this(plans, new DecisionMemo(0), Detail.FULL);
    }

    /**
     * A shard that has decided nothing yet, with a memory that it may share with others.
     *
     * @param plans the plans to decide under, one per experiment
     * @param memo what has been computed for these plans before
     * @param detail how much records say beyond the decisions
     */
    public DecideShard(Collection<Plan> plans, DecisionMemo memo, Detail detail) {
        this.memo = memo;
        this.detail = detail;
        plans.forEach(plan -> this.plans.put(plan.experiment(), plan));
    }

    /**
     * Applies one earlier state change. Entries of an experiment without a plan are left alone.
     *
     * @throws io.tallyward.engine.plan.PlanChangedException when decisions were taken under another plan
     */
    public void restore(byte[] key, byte[] value) {
        try {
            DataInputStream keyIn = reader(key);
            byte kind = keyIn.readByte();
            String experiment = keyIn.readUTF();
            if (!plans.containsKey(experiment)) {
                unplannedState.add(experiment);
                return;
            }
            if (value == null && kind != WINDOW) {
                return;
            }
            if (kind == WINDOW) {
                decider(experiment)
                        .restoreWindow(new Completeness.Entry(
                                keyIn.readLong(),
                                keyIn.readInt(),
                                value == null
                                        ? Optional.empty()
                                        : Optional.of(Completeness.Parts.read(reader(value)))));
            } else if (kind == EXPERIMENT) {
                decider(experiment).read(reader(value));
            } else if (kind == LOOK) {
                decider(experiment).restoreLook(TakenLook.read(reader(value)));
            } else {
                throw new IllegalStateException(
                        "stored decisions: entry of unknown kind " + kind
                                + " (expected: d, p or l); the state was written by another version, whose state topics have to be removed");
            }
        } catch (IOException e) {
            throw new UncheckedIOException("stored decisions: an entry is cut short", e);
        }
    }

    private static DataInputStream reader(byte[] bytes) {
        return new DataInputStream(new ByteArrayInputStream(bytes));
    }

    /**
     * Takes what one partition has sealed of one experiment. An update of an experiment without a plan is set aside and
     * counted.
     *
     * @throws io.tallyward.engine.plan.PlanChangedException when it was counted under another plan
     */
    public void apply(TallyUpdate update) {
        if (plans.containsKey(update.experiment())) {
            decider(update.experiment()).apply(update);
        } else {
            unplanned.merge(update.experiment(), 1L, Long::sum);
        }
    }

    /**
     * Takes over what stands in the book of plans: knows experiments that are new, under another plan those of which nothing has
     * arrived, and the others under their amendments. Experiments that are not named stay as they are.
     *
     * @throws io.tallyward.engine.plan.PlanChangedException when decisions were taken under another plan
     * @throws io.tallyward.engine.plan.LateAmendmentException when it is too late for an amendment
     */
    public void adopt(Collection<PlanBook.Entry> entries) {
        for (PlanBook.Entry entry : entries) {
            Plan plan = entry.plan();
            Plan before = plans.put(plan.experiment(), plan);
            if (!plan.equals(before)) {
                digests.remove(plan.experiment());
            }
            ExperimentDecider decider = deciders.get(plan.experiment());
            if (decider != null && !plan.equals(before)) {
                deciders.put(
                        plan.experiment(),
                        decider.isUntouched() ? new ExperimentDecider(plan, memo, detail) : decider.amended(plan));
            }
        }
    }

    /**
     * Tells of proposals of plans that were refused, each once. Those of experiments that are not known here are left alone.
     *
     * @param refusals the latest ones of the experiment, in order
     */
    public void refuse(String experiment, List<PlanBook.Refusal> refusals) {
        ExperimentDecider decider = deciders.get(experiment);
        if (decider != null) {
            decider.refuse(refusals);
        }
    }

    /** Experiments of which there is state that was not restored, as no plan was known. */
    public Set<String> unplannedState() {
        return Set.copyOf(unplannedState);
    }

    /** Digest of the plan that an experiment is decided under; empty where there is none. */
    public Optional<String> planDigest(String experiment) {
        return Optional.ofNullable(plans.get(experiment))
                .map(plan -> digests.computeIfAbsent(experiment, name -> PlanDigest.of(plan)));
    }

    /** Makes a planned experiment known before anything of it arrives, so that it is seen to be waiting. */
    public void expect(String experiment) {
        if (plans.containsKey(experiment)) {
            decider(experiment);
        }
    }

    private ExperimentDecider decider(String experiment) {
        return deciders.computeIfAbsent(experiment, name -> new ExperimentDecider(plans.get(name), memo, detail));
    }

    /** Everything to be made durable since this was last asked. */
    public DecideEffects drain() {
        List<StateChange> state = new ArrayList<>();
        List<DecisionRecord> decisions = new ArrayList<>();
        List<Notice> notices = new ArrayList<>();
        deciders.forEach((experiment, decider) -> {
            decisions.addAll(decider.takeDecisions());
            notices.addAll(decider.takeNotices());
            for (TakenLook look : decider.takeNewLooks()) {
                state.add(new StateChange(lookKey(experiment, look), pack(look::write)));
            }
            decider.takeChangedWindows()
                    .forEach(entry -> state.add(new StateChange(
                            windowKey(experiment, entry),
                            entry.parts().map(present -> pack(present::write)).orElse(null))));
            if (decider.takeChanged()) {
                state.add(new StateChange(experimentKey(experiment), pack(decider::write)));
            }
        });
        return new DecideEffects(state, decisions, notices);
    }

    /** The decisions since this was last asked, for a host that keeps no state and tells nobody. */
    public List<DecisionRecord> drainDecisions() {
        List<DecisionRecord> decisions = new ArrayList<>();
        for (ExperimentDecider decider : deciders.values()) {
            decisions.addAll(decider.takeDecisions());
            decider.takeNotices();
            decider.takeNewLooks();
            decider.takeChangedWindows();
            decider.takeChanged();
        }
        return decisions;
    }

    private static byte[] experimentKey(String experiment) {
        return pack(out -> {
            out.writeByte(EXPERIMENT);
            out.writeUTF(experiment);
        });
    }

    private static byte[] windowKey(String experiment, Completeness.Entry entry) {
        return pack(out -> {
            out.writeByte(WINDOW);
            out.writeUTF(experiment);
            out.writeLong(entry.windowStart());
            out.writeInt(entry.number());
        });
    }

    private static byte[] lookKey(String experiment, TakenLook look) {
        return pack(out -> {
            out.writeByte(LOOK);
            out.writeUTF(experiment);
            out.writeUTF(look.comparison().variant());
            out.writeInt(look.look().number());
        });
    }

    /** Where every experiment stands that this shard has heard of, by name. */
    public Map<String, ExperimentView> views() {
        Map<String, ExperimentView> views = new LinkedHashMap<>();
        deciders.forEach((experiment, decider) -> views.put(experiment, decider.view()));
        return views;
    }

    /** Updates that were set aside because no plan names their experiment, by experiment. */
    public Map<String, Long> unplanned() {
        return Map.copyOf(unplanned);
    }
}
