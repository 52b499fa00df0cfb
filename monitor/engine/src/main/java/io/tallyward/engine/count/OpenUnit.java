package io.tallyward.engine.count;

import java.io.DataOutput;
import java.io.IOException;
import java.util.Arrays;

/**
 * A unit whose trial, if it has one, can still change: its standing first exposure, how often it was exposed to each
 * variant, and its clicks. Clicks that can no longer be in time, whatever exposure may still arrive, are only counted.
 */
final class OpenUnit {

    private static final int NO_TRIAL = -1;

    /**
     * Clicks of one unit that are kept with their times. A person does not click so often within the attribution time; a
     * bot may, and further clicks of it are then only counted, as repeats or crossovers, and cannot make a success.
     */
    static final int MOST_CLICKS = 1_000;

    private int variant = NO_TRIAL;
    private long first;
    private int firstTie;
    private int segments;

    private final int[] exposures;
    private final int[] tooLate;
    private final int[] surplus;

    private int clicks;
    private long[] clickTimes = new long[2];
    private byte[] clickVariants = new byte[2];
    private long[] clickArrivals = new long[2];

    OpenUnit(int variants) {
        exposures = new int[variants];
        tooLate = new int[variants];
        surplus = new int[variants];
    }

    boolean hasTrial() {
        return variant != NO_TRIAL;
    }

    /** Variant of the standing first exposure. */
    int variant() {
        return variant;
    }

    /** Event time of the standing first exposure. */
    long first() {
        return first;
    }

    boolean isEmpty() {
        return !hasTrial() && clicks == 0;
    }

    /** Events kept here whose outcome is not final yet. */
    int events() {
        return sum(exposures) + sum(tooLate) + sum(surplus) + clicks;
    }

    private static int sum(int[] counts) {
        int sum = 0;
        for (int count : counts) {
            sum += count;
        }
        return sum;
    }

    /**
     * Adds an exposure. The earliest by event time stands; ties are broken by a digest of the event, then by variant, so that
     * the order of arrival does not matter.
     *
     * @param tie the event's digest, compared without sign
     * @return whether it is the exposure that stands now; what is known of the segments is then of another one
     */
    boolean expose(int exposedVariant, long atMillis, int tie, long attributionMillis) {
        exposures[exposedVariant]++;
        boolean stands = !hasTrial() || isEarlier(exposedVariant, atMillis, tie);
        if (stands) {
            variant = exposedVariant;
            first = atMillis;
            firstTie = tie;
            foldClicksAfter(atMillis + attributionMillis);
        }
        return stands;
    }

    /** Code of the standing first exposure's segments; 0 where the plan names none. */
    int segments() {
        return segments;
    }

    /** Sets the code of the standing first exposure's segments. */
    void segments(int code) {
        segments = code;
    }

    /** Adds an exposure that came too late to stand, even where it ties with the one that does. */
    void exposeAgain(int exposedVariant) {
        exposures[exposedVariant]++;
    }

    private boolean isEarlier(int exposedVariant, long atMillis, int tie) {
        if (atMillis != first) {
            return atMillis < first;
        }
        int byTie = Integer.compareUnsigned(tie, firstTie);
        return byTie < 0 || (byTie == 0 && exposedVariant < variant);
    }

    /**
     * Adds a click.
     *
     * @param arrivalMillis watermark of the click's source when it arrived: a click counts only if its source had not yet
     *     passed the sealing of the trial's window, even where another source holds that window open
     */
    void click(int clickedVariant, long atMillis, long arrivalMillis, long attributionMillis) {
        if (hasTrial() && atMillis > first + attributionMillis) {
            tooLate[clickedVariant]++;
            return;
        }
        if (clicks == MOST_CLICKS) {
            surplus[clickedVariant]++;
            return;
        }
        keep(clickedVariant, atMillis, arrivalMillis);
    }

    private void keep(int clickedVariant, long atMillis, long arrivalMillis) {
        if (clicks == clickTimes.length) {
            clickTimes = Arrays.copyOf(clickTimes, 2 * clicks);
            clickVariants = Arrays.copyOf(clickVariants, 2 * clicks);
            clickArrivals = Arrays.copyOf(clickArrivals, 2 * clicks);
        }
        clickTimes[clicks] = atMillis;
        clickVariants[clicks] = (byte) clickedVariant;
        clickArrivals[clicks] = arrivalMillis;
        clicks++;
    }

    /** A first exposure can only move to an earlier time, so a click past its attribution stays past it. */
    private void foldClicksAfter(long lastInTime) {
        int kept = 0;
        for (int i = 0; i < clicks; i++) {
            if (clickTimes[i] > lastInTime) {
                tooLate[clickVariants[i]]++;
            } else {
                keepClick(i, kept++);
            }
        }
        clicks = kept;
    }

    /**
     * Removes the clicks before a moment that no standing exposure precedes: no exposure before that moment can still
     * arrive.
     *
     * @return how many were removed; each is an orphan
     */
    int removeOrphansBefore(long endMillis, OutcomeCounts.Builder outcomes) {
        int kept = 0;
        for (int i = 0; i < clicks; i++) {
            boolean preceded = hasTrial() && first <= clickTimes[i];
            if (preceded || clickTimes[i] >= endMillis) {
                keepClick(i, kept++);
            } else {
                outcomes.addOf(clickVariants[i], Outcome.ORPHAN);
            }
        }
        int removed = clicks - kept;
        clicks = kept;
        if (isEmpty()) {
            removed += sum(surplus);
            for (int of = 0; of < surplus.length; of++) {
                outcomes.add(Outcome.ORPHAN, surplus[of]).addOrphans(of, surplus[of]);
                surplus[of] = 0;
            }
        }
        return removed;
    }

    private void keepClick(int from, int to) {
        clickTimes[to] = clickTimes[from];
        clickVariants[to] = clickVariants[from];
        clickArrivals[to] = clickArrivals[from];
    }

    /** The latest click that still waits for an exposure, or {@code Long.MIN_VALUE} when there is none. */
    long latestClick() {
        long latest = Long.MIN_VALUE;
        for (int i = 0; i < clicks; i++) {
            latest = Math.max(latest, clickTimes[i]);
        }
        return latest;
    }

    /** Whether the trial is a success when its window is sealed at the given watermark. */
    boolean successful(long sealAtMillis) {
        for (int i = 0; i < clicks; i++) {
            if (clickVariants[i] == variant && clickTimes[i] >= first && clickArrivals[i] < sealAtMillis) {
                return true;
            }
        }
        return false;
    }

    /**
     * The final outcomes of all events kept here, once the trial can no longer change.
     *
     * @param sealAtMillis the watermark at which the trial's window is sealed
     */
    void settle(long sealAtMillis, OutcomeCounts.Builder outcomes) {
        outcomes.add(Outcome.TRIAL, 1).add(Outcome.REPEAT, exposures[variant] - 1L);
        outcomes.add(Outcome.REPEAT, surplus[variant]);
        outcomes.add(Outcome.EXPIRED, tooLate[variant]);
        for (int other = 0; other < exposures.length; other++) {
            if (other != variant) {
                outcomes.add(Outcome.CROSSOVER, (long) exposures[other] + tooLate[other] + surplus[other]);
            }
        }
        boolean successful = successful(sealAtMillis);
        boolean told = false;
        for (int i = 0; i < clicks; i++) {
            if (clickTimes[i] < first) {
                outcomes.addOf(clickVariants[i], Outcome.ORPHAN);
            } else if (clickVariants[i] != variant) {
                outcomes.add(Outcome.CROSSOVER, 1);
            } else if (!successful) {
                outcomes.add(Outcome.LATE, 1);
            } else {
                outcomes.add(told ? Outcome.REPEAT : Outcome.SUCCESS, 1);
                told = true;
            }
        }
    }

    /** Makes it a unit of which nothing is known yet. */
    void clear() {
        variant = NO_TRIAL;
        first = 0;
        firstTie = 0;
        segments = 0;
        clicks = 0;
        Arrays.fill(exposures, 0);
        Arrays.fill(tooLate, 0);
        Arrays.fill(surplus, 0);
    }

    /** An independent copy, no larger than it has to be. */
    OpenUnit copy() {
        OpenUnit copy = new OpenUnit(exposures.length);
        copy.variant = variant;
        copy.first = first;
        copy.firstTie = firstTie;
        copy.segments = segments;
        System.arraycopy(exposures, 0, copy.exposures, 0, exposures.length);
        System.arraycopy(tooLate, 0, copy.tooLate, 0, tooLate.length);
        System.arraycopy(surplus, 0, copy.surplus, 0, surplus.length);
        copy.clicks = clicks;
        copy.clickTimes = Arrays.copyOf(clickTimes, Math.max(2, clicks));
        copy.clickVariants = Arrays.copyOf(clickVariants, Math.max(2, clicks));
        copy.clickArrivals = Arrays.copyOf(clickArrivals, Math.max(2, clicks));
        return copy;
    }

    /** The standing exposure's digest. */
    int firstTie() {
        return firstTie;
    }

    int clicks() {
        return clicks;
    }

    long clickTime(int click) {
        return clickTimes[click];
    }

    int clickVariant(int click) {
        return clickVariants[click];
    }

    long clickArrival(int click) {
        return clickArrivals[click];
    }

    int exposures(int ofVariant) {
        return exposures[ofVariant];
    }

    int tooLate(int ofVariant) {
        return tooLate[ofVariant];
    }

    /** Whether clicks were only counted because there are too many. */
    boolean hasSurplus() {
        return sum(surplus) > 0;
    }

    /** Puts a standing exposure back in place, with the number of exposures to its variant. */
    void restoreTrial(int standingVariant, long at, int tie, int times) {
        variant = standingVariant;
        first = at;
        firstTie = tie;
        exposures[standingVariant] = times;
    }

    /** Puts one more exposure back. */
    void restoreExposure(int exposedVariant) {
        exposures[exposedVariant]++;
    }

    /** Puts a click back that came past its attribution. */
    void restoreTooLate(int clickedVariant) {
        tooLate[clickedVariant]++;
    }

    /** Puts a kept click back. */
    void restoreClick(int clickedVariant, long atMillis, long arrivalMillis) {
        keep(clickedVariant, atMillis, arrivalMillis);
    }

    void write(DataOutput out) throws IOException {
        out.writeByte(variant);
        if (hasTrial()) {
            out.writeLong(first);
            out.writeInt(firstTie);
            VariableLength.write(out, segments);
        }
        for (int i = 0; i < exposures.length; i++) {
            VariableLength.write(out, exposures[i]);
            VariableLength.write(out, tooLate[i]);
            VariableLength.write(out, surplus[i]);
        }
        VariableLength.write(out, clicks);
        for (int i = 0; i < clicks; i++) {
            out.writeLong(clickTimes[i]);
            out.writeByte(clickVariants[i]);
            out.writeLong(clickArrivals[i]);
        }
    }

    /** Takes over what {@link #write} wrote. */
    void read(ChunkReader in) {
        clear();
        variant = in.readByte();
        if (hasTrial()) {
            first = in.readLong();
            firstTie = in.readInt();
            segments = VariableLength.read(in);
        }
        for (int i = 0; i < exposures.length; i++) {
            exposures[i] = VariableLength.read(in);
            tooLate[i] = VariableLength.read(in);
            surplus[i] = VariableLength.read(in);
        }
        int stored = VariableLength.read(in);
        for (int i = 0; i < stored; i++) {
            long at = in.readLong();
            int clickedVariant = in.readByte();
            keep(clickedVariant, at, in.readLong());
        }
    }
}
