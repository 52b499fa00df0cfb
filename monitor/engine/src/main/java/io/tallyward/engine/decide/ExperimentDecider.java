package io.tallyward.engine.decide;

import io.tallyward.engine.EngineVersion;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.LateAmendmentException;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanChangedException;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.RecordDigest;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.shard.Packing;
import java.io.ByteArrayInputStream;
import java.io.DataInput;
import java.io.DataInputStream;
import java.io.DataOutput;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;

/**
 * Decides about one experiment. Takes its complete windows one by one in order; after each it judges the data, tells held
 * verdicts if trust has returned, and takes the looks that are due. What it decides depends on nothing but these windows.
 */
final class ExperimentDecider {

    private final Plan plan;
    private final String planDigest;
    private final long windowMillis;
    private final NoticeWriter writer;
    private final Detail detail;

    private final DecisionMemo memo;
    private final Completeness completeness;
    private final CumulativeCounts counts;
    private final SplitWatch splitWatch;
    private final SplitTrace splitTrace;
    private final TrustWatch trustWatch;
    private final Challengers challengers;

    private long completeUntil;
    private OutcomeCounts outcomes = OutcomeCounts.NONE;
    private long idleSealed;
    private TrustWatch.Judgement judgement = TrustWatch.Judgement.SOUND;
    private int sequence;
    private String lastHash = DecisionRecord.NO_PREVIOUS;
    private int amendmentsTold;
    private long refusalsTold;
    private int looksTaken;
    private int looksDelayed;
    private String delayReason = "";

    private final List<DecisionRecord> decisions = new ArrayList<>();
    private final List<Notice> notices = new ArrayList<>();
    private final List<TakenLook> newLooks = new ArrayList<>();
    private boolean changed;

    ExperimentDecider(Plan plan, DecisionMemo memo, Detail detail) {
        this(plan, memo, detail, new Completeness(plan.run().from().toEpochMilli()));
    }

    private ExperimentDecider(Plan plan, DecisionMemo memo, Detail detail, Completeness completeness) {
        this.plan = plan;
        this.memo = memo;
        this.completeness = completeness;
        planDigest = PlanDigest.of(plan);
        windowMillis = plan.count().window().toMillis();
        this.detail = detail;
        writer = new NoticeWriter(plan);
        completeUntil = plan.run().from().toEpochMilli();
        counts = new CumulativeCounts(plan);
        splitWatch = new SplitWatch(plan);
        splitTrace = new SplitTrace(plan);
        trustWatch = new TrustWatch(plan);
        challengers = new Challengers(plan, planDigest, memo, detail);
    }

    /** Whether nothing has arrived yet. */
    boolean isUntouched() {
        return sequence == 0 && completeness.isUntouched();
    }

    /**
     * The same, going on under the same plan with more amendments: what is restored after a restart, and what is still to be
     * made durable.
     *
     * @throws PlanChangedException when it is another plan
     * @throws LateAmendmentException when it is too late for an amendment
     */
    ExperimentDecider amended(Plan now) {
        ExperimentDecider next = new ExperimentDecider(now, memo, detail, completeness);
        try {
            next.read(new DataInputStream(new ByteArrayInputStream(Packing.pack(this::write))));
        } catch (IOException e) {
            throw new UncheckedIOException(e);
        }
        challengers.tests().forEach(test -> test.looks().forEach(next::restoreLook));
        next.decisions.addAll(decisions);
        next.notices.addAll(notices);
        next.newLooks.addAll(newLooks);
        next.changed = true;
        return next;
    }

    /** Tells of refused proposals that were not told of yet. */
    void refuse(List<PlanBook.Refusal> refusals) {
        for (PlanBook.Refusal refusal : refusals) {
            if (refusal.number() > refusalsTold) {
                refusalsTold = refusal.number();
                changed = true;
                notices.add(writer.refused(refusal, Instant.ofEpochMilli(completeUntil), lastHash));
            }
        }
    }

    /** Takes what one partition has sealed, and every window that is complete with it. */
    void apply(TallyUpdate update) {
        if (!update.planDigest().equals(planDigest)) {
            throw new PlanChangedException(plan.experiment(), update.planDigest(), planDigest);
        }
        changed = true;
        if (sequence == 0 && detail != Detail.BARE) {
            write(Occasion.PLAN, List.of(), null);
        }
        completeness.add(update);
        long until = completeness.completeUntil();
        while (completeUntil < until) {
            complete(completeUntil);
        }
    }

    private void complete(long windowStart) {
        tellAmendments(windowStart + windowMillis);
        idleSealed += completeness.sealedIdle(windowStart) ? 1 : 0;
        Completeness.Parts parts = completeness.take(windowStart);
        completeUntil = windowStart + windowMillis;
        parts.cells().forEach(counts::add);
        outcomes = outcomes.plus(parts.outcomes());
        trustWatch.observe(windowStart, completeUntil, parts.cells());
        if (!parts.cells().isEmpty()) {
            splitWatch.observe(counts);
            traceSplit(windowStart, parts);
        }
        decide();
    }

    /** Records what takes effect at the end of the window that comes next, so that the decision there is made under it. */
    private void tellAmendments(long windowEnd) {
        List<Amendment> amendments = plan.amendmentsInForce();
        while (amendmentsTold < amendments.size()
                && amendments.get(amendmentsTold).at().toEpochMilli() <= windowEnd) {
            amendmentsTold++;
            write(Occasion.AMENDED, List.of(), amendments.get(amendmentsTold - 1));
        }
    }

    /** A bare record does not say where a mismatch comes from. */
    private void traceSplit(long windowStart, Completeness.Parts parts) {
        if (detail != Detail.BARE) {
            splitTrace.observe(windowStart, parts.cells(), parts.segments());
        }
    }

    private SplitOrigin splitOrigin() {
        boolean mismatch = judgement.trust() == Trust.MISMATCH && detail != Detail.BARE;
        return mismatch ? splitTrace.origin(splitWatch).orElse(null) : null;
    }

    private void decide() {
        TrustWatch.Judgement before = judgement;
        boolean concluded = challengers.concluded();
        judgement = trustWatch.judge(completeUntil, splitWatch.sequentialPValue(), outcomes, counts, concluded);
        boolean trustChanged = judgement.trust() != before.trust();
        NoticeWriter.Told told = told(concluded);
        Challengers.Outcome outcome =
                challengers.decide(counts, completeUntil, runEnds(), judgement.trust() == Trust.SOUND);
        looksDelayed += outcome.looksDelayed();
        delayReason = outcome.delayReason().orElse(delayReason);
        newLooks.addAll(outcome.looks());
        Optional<Occasion> occasion = outcome.occasion(trustChanged);
        if (occasion.isPresent()) {
            looksTaken += occasion.get() == Occasion.LOOK ? 1 : 0;
            write(occasion.get(), outcome.comparisons(), null);
            tell(trustChanged, told, outcome.settled());
            leaveOut(outcome.settled());
        }
    }

    private NoticeWriter.Told told(boolean concluded) {
        if (concluded) {
            return NoticeWriter.Told.ALL;
        }
        return challengers.anySettled() ? NoticeWriter.Told.SOME : NoticeWriter.Told.NONE;
    }

    private void leaveOut(List<ChallengerTest> settled) {
        for (int variant : challengers.leftOut(settled)) {
            splitWatch.leaveOut(variant, counts);
            trustWatch.leaveOut(variant);
        }
    }

    private boolean runEnds() {
        return completeUntil >= plan.end().toEpochMilli();
    }

    /**
     * Writes a record.
     *
     * @param amendmentOrNull what takes effect; null unless the occasion is an amendment
     */
    private void write(Occasion occasion, List<Comparison> looks, Amendment amendmentOrNull) {
        sequence++;
        SplitOrigin origin = splitOrigin();
        DecisionRecord record = sealed(new DecisionRecord(
                plan.experiment(),
                sequence,
                occasion,
                Instant.ofEpochMilli(completeUntil),
                planDigest,
                occasion == Occasion.PLAN ? plan.amended(List.of()) : null,
                amendmentOrNull,
                counts.list(),
                outcomes,
                idleSealed,
                splitWatch.split(counts, origin),
                judgement.trust(),
                judgement.with(origin).reason(),
                judgement.silence(),
                challengers.verdict(),
                looks,
                EngineVersion.CURRENT,
                lastHash,
                ""));
        lastHash = record.hash();
        decisions.add(record);
    }

    /** A bare record is counted and thrown away, and needs no digest. */
    private DecisionRecord sealed(DecisionRecord record) {
        return detail == Detail.BARE ? record : RecordDigest.seal(record);
    }

    private void tell(boolean trustChanged, NoticeWriter.Told told, List<ChallengerTest> settled) {
        if (detail == Detail.BARE) {
            return;
        }
        DecisionRecord record = decisions.get(decisions.size() - 1);
        if (trustChanged) {
            notices.add(writer.trust(record, told));
        }
        for (ChallengerTest test : settled) {
            notices.add(writer.settled(
                    record, test.name(), test.verdict(), test.lastLook().map(TakenLook::comparison)));
        }
    }

    List<DecisionRecord> takeDecisions() {
        return taken(decisions);
    }

    List<Notice> takeNotices() {
        return taken(notices);
    }

    List<TakenLook> takeNewLooks() {
        return taken(newLooks);
    }

    private static <T> List<T> taken(List<T> list) {
        List<T> copy = List.copyOf(list);
        list.clear();
        return copy;
    }

    /** The entries of incomplete windows that changed; those of a window that is complete are to be removed. */
    List<Completeness.Entry> takeChangedWindows() {
        return completeness.takeChanged();
    }

    boolean takeChanged() {
        boolean result = changed;
        changed = false;
        return result;
    }

    ExperimentView view() {
        SplitOrigin origin = splitOrigin();
        return ViewWriter.view(
                plan,
                planDigest,
                completeUntil == plan.run().from().toEpochMilli()
                        ? Optional.empty()
                        : Optional.of(Instant.ofEpochMilli(completeUntil)),
                counts.list(),
                outcomes,
                splitWatch.split(counts, origin),
                judgement.with(origin),
                challengers.verdict(),
                challengers.tests(),
                new ViewWriter.Looks(looksTaken, looksDelayed, delayReason),
                lastHash);
    }

    void restoreWindow(Completeness.Entry entry) {
        completeness.restore(entry);
    }

    void restoreLook(TakenLook look) {
        challengers.restoreLook(look);
    }

    void write(DataOutput out) throws IOException {
        out.writeUTF(planDigest);
        out.writeInt(plan.epochCount());
        completeness.write(out);
        counts.write(out);
        splitWatch.write(out);
        splitTrace.write(out);
        trustWatch.write(out);
        out.writeLong(completeUntil);
        outcomes.write(out);
        out.writeLong(idleSealed);
        judgement.write(out);
        out.writeInt(sequence);
        out.writeUTF(lastHash);
        out.writeInt(amendmentsTold);
        out.writeLong(refusalsTold);
        out.writeInt(looksTaken);
        out.writeInt(looksDelayed);
        out.writeUTF(delayReason);
        challengers.write(out);
    }

    void read(DataInput in) throws IOException {
        String storedDigest = in.readUTF();
        if (!storedDigest.equals(planDigest)) {
            throw new PlanChangedException(plan.experiment(), storedDigest, planDigest);
        }
        int storedEpochs = in.readInt();
        completeness.read(in);
        counts.read(in, storedEpochs);
        splitWatch.read(in, storedEpochs);
        splitTrace.read(in, storedEpochs);
        trustWatch.read(in);
        completeUntil = in.readLong();
        outcomes = OutcomeCounts.read(in);
        idleSealed = in.readLong();
        judgement = TrustWatch.Judgement.read(in);
        sequence = in.readInt();
        lastHash = in.readUTF();
        amendmentsTold = in.readInt();
        refusalsTold = in.readLong();
        looksTaken = in.readInt();
        looksDelayed = in.readInt();
        delayReason = in.readUTF();
        challengers.read(in);
        requireInTime();
    }

    /** Makes sure that an amendment that is not recorded takes effect after everything that was decided. */
    private void requireInTime() {
        List<Amendment> all = plan.amendmentsInForce();
        if (amendmentsTold < all.size() && all.get(amendmentsTold).at().toEpochMilli() <= completeUntil) {
            throw new LateAmendmentException(
                    plan.experiment(), all.get(amendmentsTold).at(), Instant.ofEpochMilli(completeUntil));
        }
    }
}
