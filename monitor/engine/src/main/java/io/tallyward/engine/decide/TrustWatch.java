package io.tallyward.engine.decide;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.record.Silence;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.Trust;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.time.Instant;
import java.util.Arrays;
import java.util.List;
import java.util.Locale;
import java.util.Optional;

/**
 * Decides after every complete window whether the data can be believed. The worst complaint is the one that is told; a
 * share that led to a complaint must fall well below its limit before trust returns, so that it does not flicker.
 */
final class TrustWatch {

    /** Shares are not judged on fewer admitted events than this. */
    private static final long EVENTS_TO_JUDGE = 1_000;

    /** A variant with this many trials due to it and none seen is silent; by chance that has probability e^-20. */
    static final long TRIALS_DUE = 20;

    /** A complaint about a share ends once the share is below this part of its limit. */
    private static final double RECOVERY = 0.8;

    private final Plan plan;
    private final long[] silentSince;
    private final double[] trialsDue;
    private final boolean[] leftOut;
    private long streamSilentSince;
    private boolean crossoverComplaint;
    private boolean orphanComplaint;
    private boolean lateComplaint;

    TrustWatch(Plan plan) {
        this.plan = plan;
        silentSince = new long[plan.variants().size()];
        trialsDue = new double[plan.variants().size()];
        leftOut = new boolean[plan.variants().size()];
        streamSilentSince = plan.run().from().toEpochMilli();
        Arrays.fill(silentSince, streamSilentSince);
    }

    /**
     * What is thought of the data.
     *
     * @param trust the worst complaint, or sound
     * @param reason the complaint in words; empty while sound
     * @param silence what is silent since when, if that is the complaint; else null
     */
    record Judgement(Trust trust, String reason, Silence silence) {

        static final Judgement SOUND = new Judgement(Trust.SOUND, "");

        Judgement(Trust trust, String reason) {
            this(trust, reason, null);
        }

        void write(DataOutput out) throws IOException {
            out.writeUTF(trust.name());
            out.writeUTF(reason);
            out.writeBoolean(silence != null);
            if (silence != null) {
                out.writeUTF(silence.variant());
                out.writeLong(silence.since().toEpochMilli());
                out.writeLong(silence.due());
            }
        }

        static Judgement read(DataInput in) throws IOException {
            Trust trust = Trust.valueOf(in.readUTF());
            String reason = in.readUTF();
            return new Judgement(
                    trust,
                    reason,
                    in.readBoolean()
                            ? new Silence(in.readUTF(), Instant.ofEpochMilli(in.readLong()), in.readLong())
                            : null);
        }

        /** The complaint, and where it comes from as far as that is known. */
        Judgement with(SplitOrigin originOrNull) {
            return originOrNull == null
                    ? this
                    : new Judgement(trust, reason + "; " + SplitWords.of(originOrNull), silence);
        }
    }

    /** No longer expects trials of a variant: whoever follows the verdict on it stops showing it. */
    void leaveOut(int variant) {
        leftOut[variant] = true;
    }

    /**
     * Stands where it stood when a judgement was recorded, but for silence. A complaint that is beneath a worse one is not seen
     * in records.
     *
     * @param told the complaint that was told, or sound
     * @param beneath the one that is seen now and may have been beneath it, or sound
     */
    void standAs(Trust told, Trust beneath) {
        crossoverComplaint = told == Trust.CROSSOVER;
        orphanComplaint = told == Trust.ORPHANS || (told == Trust.CROSSOVER && beneath == Trust.ORPHANS);
        boolean worse = told == Trust.STARVED || told == Trust.CROSSOVER || told == Trust.ORPHANS;
        lateComplaint = told == Trust.LATE || (worse && beneath == Trust.LATE);
    }

    boolean isLeftOut(int variant) {
        return leftOut[variant];
    }

    /** Takes note of a complete window. */
    void observe(long windowStart, long windowEnd, List<Cell> cells) {
        long[] trials = new long[silentSince.length];
        for (Cell cell : cells) {
            trials[cell.variant()] += cell.trials();
        }
        double[] shares = plan.sharesIn(plan.epochAt(windowStart));
        long expected = 0;
        double shareOfExpected = 0;
        for (int variant = 0; variant < trials.length; variant++) {
            if (trials[variant] > 0) {
                streamSilentSince = windowEnd;
            }
            if (!leftOut[variant]) {
                expected += trials[variant];
                shareOfExpected += shares[variant];
            }
        }
        for (int variant = 0; variant < trials.length; variant++) {
            if (trials[variant] > 0) {
                silentSince[variant] = windowEnd;
                trialsDue[variant] = 0;
            } else if (!leftOut[variant]) {
                trialsDue[variant] += expected * shares[variant] / shareOfExpected;
            }
        }
    }

    /**
     * Judges the data as of the end of a window.
     *
     * @param concluded whether every verdict has been told: whoever follows it stops showing the variants, so that
     *     silence is what is to be expected
     */
    Judgement judge(
            long windowEnd, double splitPValue, OutcomeCounts outcomes, CumulativeCounts counts, boolean concluded) {
        return judge(windowEnd, splitPValue, outcomes, counts, concluded ? Optional.empty() : silence(windowEnd));
    }

    /** The same with what is silent, if anything is. */
    Judgement judge(
            long windowEnd,
            double splitPValue,
            OutcomeCounts outcomes,
            CumulativeCounts counts,
            Optional<Silence> silence) {
        TrustLimits limits = plan.trust();
        long admitted = outcomes.total();
        double crossovers = share(outcomes.get(Outcome.CROSSOVER), admitted);
        double late = share(outcomes.get(Outcome.LATE), admitted);
        crossoverComplaint = exceeds(crossovers, limits.crossoverShare(), admitted, crossoverComplaint);
        lateComplaint = exceeds(late, limits.lateShare(), admitted, lateComplaint);
        OrphanGap gap = OrphanGap.widest(plan, outcomes, counts, leftOut);
        orphanComplaint = gap.difference() > (orphanComplaint ? RECOVERY : 1) * limits.orphanGap();
        if (splitPValue <= plan.splitCheck().alpha()) {
            return new Judgement(
                    Trust.MISMATCH,
                    text(
                            "the observed split contradicts the planned one (sequential p-value %.2g, limit %.2g)",
                            splitPValue, plan.splitCheck().alpha()));
        }
        if (crossoverComplaint) {
            return new Judgement(
                    Trust.CROSSOVER,
                    text(
                            "%.2f %% of events are of units under another variant than their first (limit %.2f %%)",
                            100 * crossovers, 100 * limits.crossoverShare()));
        }
        if (orphanComplaint) {
            return new Judgement(Trust.ORPHANS, gap.words(plan));
        }
        if (silence.isPresent()) {
            return new Judgement(Trust.STARVED, words(silence.get(), windowEnd), silence.get());
        }
        if (lateComplaint) {
            return new Judgement(
                    Trust.LATE,
                    text(
                            "%.2f %% of events came after their window was sealed (limit %.2f %%)",
                            100 * late, 100 * limits.lateShare()));
        }
        return Judgement.SOUND;
    }

    private static boolean exceeds(double share, double limit, long admitted, boolean complaint) {
        return admitted >= EVENTS_TO_JUDGE && share > (complaint ? RECOVERY * limit : limit);
    }

    private static double share(long part, long whole) {
        return whole == 0 ? 0 : (double) part / whole;
    }

    private Optional<Silence> silence(long windowEnd) {
        long limitMillis = plan.trust().starvedAfter().toMillis();
        if (windowEnd - streamSilentSince >= limitMillis) {
            return Optional.of(new Silence("", Instant.ofEpochMilli(streamSilentSince), 0));
        }
        for (int variant = 0; variant < silentSince.length; variant++) {
            boolean due = !leftOut[variant] && trialsDue[variant] >= TRIALS_DUE;
            if (due && windowEnd - silentSince[variant] >= limitMillis) {
                return Optional.of(new Silence(
                        plan.variants().get(variant).name(),
                        Instant.ofEpochMilli(silentSince[variant]),
                        Math.round(trialsDue[variant])));
            }
        }
        return Optional.empty();
    }

    private static String words(Silence silence, long windowEnd) {
        String since = text(
                "since %s (%.1f h)",
                silence.since(), (windowEnd - silence.since().toEpochMilli()) / 3_600_000.0);
        return silence.variant().isEmpty()
                ? "no trial of any variant " + since
                : text("no trial of %s %s, although about %d were due", silence.variant(), since, silence.due());
    }

    private static String text(String format, Object... values) {
        return String.format(Locale.ROOT, format, values);
    }

    void write(DataOutput out) throws IOException {
        for (int variant = 0; variant < silentSince.length; variant++) {
            out.writeLong(silentSince[variant]);
            out.writeDouble(trialsDue[variant]);
            out.writeBoolean(leftOut[variant]);
        }
        out.writeLong(streamSilentSince);
        out.writeBoolean(crossoverComplaint);
        out.writeBoolean(orphanComplaint);
        out.writeBoolean(lateComplaint);
    }

    void read(DataInput in) throws IOException {
        for (int variant = 0; variant < silentSince.length; variant++) {
            silentSince[variant] = in.readLong();
            trialsDue[variant] = in.readDouble();
            leftOut[variant] = in.readBoolean();
        }
        streamSilentSince = in.readLong();
        crossoverComplaint = in.readBoolean();
        orphanComplaint = in.readBoolean();
        lateComplaint = in.readBoolean();
    }
}
