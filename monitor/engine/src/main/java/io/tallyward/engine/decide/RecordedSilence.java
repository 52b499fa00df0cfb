package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Silence;
import io.tallyward.engine.record.Trust;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Optional;

/** The silence that a record tells of, held against what its counts and those of the record before allow. */
final class RecordedSilence {

    private final Plan plan;
    private final TrustWatch watch;
    private final DecisionRecord last;
    private final DecisionRecord recorded;
    private final List<Objection> objections;

    RecordedSilence(
            Plan plan, TrustWatch watch, DecisionRecord last, DecisionRecord recorded, List<Objection> objections) {
        this.plan = plan;
        this.watch = watch;
        this.last = last;
        this.recorded = recorded;
        this.objections = objections;
    }

    /** What is silent, if anything is. */
    Optional<Silence> again(CumulativeCounts counts, CumulativeCounts earlier) {
        Silence silence = recorded.silence();
        if (silence == null) {
            checkHeard();
            return Optional.empty();
        }
        int variant = plan.variantIndex(silence.variant());
        boolean stream = silence.variant().isEmpty();
        expect(
                stream || (variant >= 0 && !watch.isLeftOut(variant)),
                "variant",
                silence.variant(),
                "a variant watched");
        expect(
                stream ? silence.due() == 0 : silence.due() >= TrustWatch.TRIALS_DUE,
                "due",
                silence.due(),
                stream ? "0" : TrustWatch.TRIALS_DUE + " or more");
        Instant latest = recorded.windowEnd().minus(plan.trust().starvedAfter());
        long elapsed = Duration.between(plan.run().from(), silence.since()).toMillis();
        expect(
                elapsed >= 0
                        && elapsed % plan.count().window().toMillis() == 0
                        && !silence.since().isAfter(latest),
                "since",
                silence.since(),
                "the end of a window, at the latest " + latest);
        boolean all = !last.windowEnd().isBefore(silence.since());
        if (all && (stream || variant >= 0)) {
            long before = stream ? total(last) : earlier.trials(variant);
            long now = stream ? total(recorded) : counts.trials(variant);
            expect(before == now, "since", silence.since(), "a moment after the last trial counted");
        }
        return Optional.of(silence);
    }

    /** Whether the records themselves show that the stream has been silent for too long. */
    private void checkHeard() {
        boolean silent = total(last) == total(recorded)
                && !recorded.windowEnd().minus(plan.trust().starvedAfter()).isBefore(last.windowEnd());
        boolean worse = recorded.trust().compareTo(Trust.STARVED) < 0;
        if (silent && !worse) {
            objections.add(new Objection("silence", "null", "no trial of any variant since " + last.windowEnd()));
        }
    }

    private static long total(DecisionRecord record) {
        return record.counts().stream().mapToLong(VariantCount::trials).sum();
    }

    private void expect(boolean holds, String field, Object found, String expected) {
        if (!holds) {
            objections.add(new Objection("silence." + field, String.valueOf(found), expected));
        }
    }
}
