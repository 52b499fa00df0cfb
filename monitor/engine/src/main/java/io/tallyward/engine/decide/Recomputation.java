package io.tallyward.engine.decide;

import io.tallyward.engine.EngineVersion;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.AmendmentRules;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.shard.Packing;
import java.io.ByteArrayInputStream;
import java.io.DataInputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;

/**
 * Decides about one experiment once more, from nothing but its records: from the plan in the first and the counts in each.
 * It drives the classes that decided in the first place; their other evidence, the path of earlier looks, is what it has
 * computed itself from earlier records. Not thread-safe; keeps one record and the looks.
 *
 * <p>A few figures come from windows between records. They are taken from the record and held against everything that bounds
 * them: what became of events that were no trial and no success, how many windows were sealed while a partition was idle,
 * where a mismatch began with the units since and by segment, and since when a variant is silent.
 */
public final class Recomputation {

    private Plan plan;
    private final String planDigest;
    private Challengers challengers;
    private SplitWatch splitWatch;
    private TrustWatch trustWatch;
    private CumulativeCounts counts;
    private DecisionRecord last;
    private List<Objection> objections = new ArrayList<>();

    private Recomputation(Plan plan) {
        this.plan = plan;
        planDigest = PlanDigest.of(plan);
        begin(plan);
    }

    private void begin(Plan now) {
        plan = now;
        challengers = new Challengers(now, planDigest, new DecisionMemo(0), Detail.FULL);
        splitWatch = new SplitWatch(now);
        trustWatch = new TrustWatch(now);
        counts = new CumulativeCounts(now);
    }

    /**
     * What comes of a record.
     *
     * @param record as it should read, chained like the record given; empty when none was due
     * @param objections what cannot be, in the order of the fields; empty when nothing is wrong
     */
    public record Result(Optional<DecisionRecord> record, List<Objection> objections) {

        public Result {
            objections = List.copyOf(objections);
        }
    }

    /**
     * Begins with an experiment's first record.
     *
     * @throws IllegalArgumentException if it carries no plan, or one that cannot be carried out
     */
    public static Recomputation of(DecisionRecord first) {
        if (first.plan() == null) {
            throw new IllegalArgumentException("plan: null (expected: the plan, in the first record)");
        }
        return new Recomputation(first.plan().amended(List.of()));
    }

    /**
     * The next record once more. After a result with objections or another record nothing further can be told.
     *
     * @param recorded the next record of the experiment
     */
    public Result next(DecisionRecord recorded) {
        objections = new ArrayList<>();
        if (recorded.occasion() == Occasion.AMENDED && recorded.amendment() != null) {
            if (!allows(recorded)) {
                return new Result(Optional.empty(), objections);
            }
            amend(recorded.amendment());
        }
        expect(
                (recorded.occasion() == Occasion.AMENDED) == (recorded.amendment() != null),
                "amendment",
                recorded.amendment() == null ? "null" : "an amendment",
                "an amendment where the occasion is one, else null");
        CumulativeCounts earlier = counts;
        try {
            counts = CumulativeCounts.of(plan, recorded.counts());
        } catch (IllegalArgumentException e) {
            objections.add(new Objection("counts", "impossible counts", e.getMessage()));
            return new Result(Optional.empty(), objections);
        }
        checkGrowth(recorded, earlier);
        Optional<DecisionRecord> again = last == null ? Optional.of(first(recorded)) : decided(recorded, earlier);
        last = recorded;
        return new Result(again, objections);
    }

    private DecisionRecord first(DecisionRecord recorded) {
        return record(recorded, Occasion.PLAN, TrustWatch.Judgement.SOUND, List.of());
    }

    private Optional<DecisionRecord> decided(DecisionRecord recorded, CumulativeCounts earlier) {
        readSplit(recorded, earlier);
        long windowEnd = recorded.windowEnd().toEpochMilli();
        TrustWatch.Judgement judgement = judge(recorded, earlier);
        SplitOrigin origin = judgement.trust() == Trust.MISMATCH
                ? new RecordedOrigin(plan, splitWatch, counts, recorded, objections).again()
                : null;
        if (recorded.occasion() == Occasion.AMENDED) {
            return Optional.of(record(recorded, Occasion.AMENDED, judgement.with(origin), List.of(), origin));
        }
        Challengers.Outcome outcome = challengers.decide(
                counts, windowEnd, windowEnd >= plan.end().toEpochMilli(), judgement.trust() == Trust.SOUND);
        Optional<DecisionRecord> record = outcome.occasion(judgement.trust() != last.trust())
                .map(occasion -> record(recorded, occasion, judgement.with(origin), outcome.comparisons(), origin));
        for (int variant : challengers.leftOut(outcome.settled())) {
            splitWatch.leaveOut(variant, counts);
            trustWatch.leaveOut(variant);
        }
        return record;
    }

    private DecisionRecord record(
            DecisionRecord recorded, Occasion occasion, TrustWatch.Judgement judgement, List<Comparison> looks) {
        return record(recorded, occasion, judgement, looks, null);
    }

    private DecisionRecord record(
            DecisionRecord recorded,
            Occasion occasion,
            TrustWatch.Judgement judgement,
            List<Comparison> looks,
            SplitOrigin origin) {
        return new DecisionRecord(
                plan.experiment(),
                last == null ? 1 : last.sequence() + 1,
                occasion,
                occasion == Occasion.PLAN ? plan.run().from() : recorded.windowEnd(),
                planDigest,
                occasion == Occasion.PLAN ? plan : null,
                occasion == Occasion.AMENDED ? recorded.amendment() : null,
                counts.list(),
                outcomes(recorded),
                recorded.idleSealed(),
                splitWatch.split(counts, origin),
                judgement.trust(),
                judgement.reason(),
                judgement.silence(),
                challengers.verdict(),
                looks,
                EngineVersion.CURRENT,
                last == null ? DecisionRecord.NO_PREVIOUS : last.hash(),
                recorded.hash());
    }

    /** Trials and successes are in the counts too. */
    private OutcomeCounts outcomes(DecisionRecord recorded) {
        long[] outcomes = recorded.outcomes().toArray();
        outcomes[Outcome.TRIAL.ordinal()] =
                recorded.counts().stream().mapToLong(VariantCount::trials).sum();
        outcomes[Outcome.SUCCESS.ordinal()] =
                recorded.counts().stream().mapToLong(VariantCount::successes).sum();
        return recorded.outcomes().withCounts(outcomes);
    }

    /** The evidence now, and, where it was larger between records, at the counts that the record says it was largest at. */
    private void readSplit(DecisionRecord recorded, CumulativeCounts earlier) {
        new RecordedPeak(plan, splitWatch, objections).read(recorded.split().peak(), earlier, counts);
        if (!counts.none()) {
            splitWatch.observe(counts);
        }
    }

    private TrustWatch.Judgement judge(DecisionRecord recorded, CumulativeCounts earlier) {
        trustWatch.standAs(last.trust(), recorded.trust());
        RecordedSilence silence = new RecordedSilence(plan, trustWatch, last, recorded, objections);
        return trustWatch.judge(
                recorded.windowEnd().toEpochMilli(),
                splitWatch.sequentialPValue(),
                recorded.outcomes(),
                counts,
                challengers.concluded() ? Optional.empty() : silence.again(counts, earlier));
    }

    private void checkGrowth(DecisionRecord recorded, CumulativeCounts earlier) {
        if (last == null) {
            expect(
                    recorded.counts().equals(new CumulativeCounts(plan).list()),
                    "counts",
                    "counts above 0",
                    "no counts before the run");
            expect(recorded.outcomes().equals(OutcomeCounts.NONE), "outcomes", "events", "no events before the run");
            expect(recorded.idleSealed() == 0, "idleSealed", recorded.idleSealed(), "0 before the run");
            return;
        }
        expect(
                counts.includes(earlier),
                "counts",
                "fewer than in record " + last.sequence(),
                "at least those of record " + last.sequence());
        checkTime(recorded);
        for (Outcome outcome : Outcome.values()) {
            long before = last.outcomes().get(outcome);
            expect(
                    recorded.outcomes().get(outcome) >= before,
                    "outcomes." + outcome.code(),
                    recorded.outcomes().get(outcome),
                    "at least " + before + ", as in record " + last.sequence());
        }
        long windows = (recorded.windowEnd().toEpochMilli() - last.windowEnd().toEpochMilli())
                / plan.count().window().toMillis();
        long idle = recorded.idleSealed() - last.idleSealed();
        expect(
                idle >= 0 && idle <= windows,
                "idleSealed",
                recorded.idleSealed(),
                last.idleSealed() + " to " + (last.idleSealed() + windows));
    }

    private void checkTime(DecisionRecord recorded) {
        long elapsed = recorded.windowEnd().toEpochMilli() - plan.run().from().toEpochMilli();
        expect(
                elapsed % plan.count().window().toMillis() == 0
                        && recorded.windowEnd().getNano() % 1_000_000 == 0,
                "windowEnd",
                recorded.windowEnd(),
                "the end of a window");
        Instant earliest = recorded.occasion() == Occasion.AMENDED
                ? last.windowEnd()
                : last.windowEnd().plus(plan.count().window());
        expect(
                !recorded.windowEnd().isBefore(earliest)
                        && !recorded.windowEnd().isAfter(plan.end()),
                "windowEnd",
                recorded.windowEnd(),
                earliest + " to " + plan.end());
    }

    private void expect(boolean holds, String field, Object found, String expected) {
        if (!holds) {
            objections.add(new Objection(field, String.valueOf(found), expected));
        }
    }

    /** Whether the plan may be amended so; it is recorded before the window at whose end the amendment takes effect. */
    private boolean allows(DecisionRecord recorded) {
        Amendment amendment = recorded.amendment();
        Instant due = recorded.windowEnd().plus(plan.count().window());
        expect(amendment.at().equals(due), "amendment.at", amendment.at(), due + ", a window after this record");
        List<Amendment> amendments = new ArrayList<>(plan.amendments());
        amendments.add(amendment);
        AmendmentRules.problem(plan.amended(amendments))
                .ifPresent(problem -> objections.add(new Objection("amendment", problem.found(), problem.expected())));
        return objections.isEmpty();
    }

    /** Goes on under the amended plan, as deciding did. */
    private void amend(Amendment amendment) {
        List<Amendment> amendments = new ArrayList<>(plan.amendments());
        amendments.add(amendment);
        Challengers before = challengers;
        SplitWatch watchBefore = splitWatch;
        int epochsBefore = plan.epochCount();
        TrustWatch trustBefore = trustWatch;
        List<VariantCount> countsBefore = counts.list();
        begin(plan.amended(amendments));
        counts = CumulativeCounts.of(plan, countsBefore);
        byte[] state = Packing.pack(out -> {
            before.write(out);
            watchBefore.write(out);
            trustBefore.write(out);
        });
        try (DataInputStream in = new DataInputStream(new ByteArrayInputStream(state))) {
            before.tests().forEach(test -> test.looks().forEach(challengers::restoreLook));
            challengers.read(in);
            splitWatch.read(in, epochsBefore);
            trustWatch.read(in);
        } catch (IOException e) {
            throw new UncheckedIOException("reading from memory failed", e);
        }
    }
}
