package io.tallyward.engine.count;

import io.tallyward.engine.event.EventSlot;
import java.util.List;

/**
 * Every unit of one experiment in one partition: what may still change of it, and what must be remembered of the rest. A
 * ledger says what became of an event as soon as that is final. What a trial is, is up to the ledger.
 */
interface CountLedger {

    /**
     * Takes an event of the run.
     *
     * @param high first half of the unit's hash
     * @param low second half
     * @param arrivalMillis watermark of the event's source when the event arrived
     * @param late whether the event came too late to change a count of its own window, in the shard or by the reckoning of
     *     the event's source
     * @return its outcome when that is final at once, or null while it can still change
     */
    Outcome accept(long high, long low, EventSlot event, long arrivalMillis, boolean late);

    /** The first window in which anything falls due, or {@code Long.MAX_VALUE} when nothing does. */
    long firstDue();

    /**
     * Seals a window, in an order that the events before determine.
     *
     * @param outcomes receives the outcomes that become final
     * @param counts receives the counts
     * @return the units it was about, packed, each chunk small enough for one record
     */
    List<byte[]> seal(long windowStart, OutcomeCounts.Builder outcomes, WindowCounts counts);

    /** Packs the units that are open and changed since this was last asked. */
    void takeChanged(OpenChunks chunks);

    /** Restores an open unit as it was packed; a later version of the same unit replaces it. */
    void restoreOpen(ChunkReader in);

    /** Restores a unit as it was packed when a window was sealed. */
    void restoreSealed(ChunkReader in);

    /** Forgets what was restored as open although the windows before a moment are sealed. */
    void forgetDueBefore(long sealedUntilMillis);

    /** Events whose outcome can still change. */
    long openEvents();

    /** How many units are remembered, open and sealed. */
    int units();
}
