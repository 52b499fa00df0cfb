package io.tallyward.demo;

/** When to kill the monitor: after equal parts of the stream, never at its very beginning or end. Not thread-safe. */
final class KillSchedule {

    private final long events;
    private final int kills;
    private int done;

    KillSchedule(long events, int kills) {
        this.events = events;
        this.kills = kills;
    }

    /** Whether a kill is due now that so many events have been sent; true once per kill. */
    boolean due(long count) {
        if (done < kills && count >= events * (done + 1) / (kills + 1)) {
            done++;
            return true;
        }
        return false;
    }
}
