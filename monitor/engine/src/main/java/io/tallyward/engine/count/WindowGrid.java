package io.tallyward.engine.count;

/**
 * In which window a moment lies. Most moments lie in the window of the one before, and a division costs as much as the rest of
 * an event's arithmetic. Not thread-safe.
 */
final class WindowGrid {

    private final long windowMillis;
    private long last;

    WindowGrid(long windowMillis) {
        this.windowMillis = windowMillis;
    }

    /** Start of the window of a moment, milliseconds since the epoch. */
    long of(long atMillis) {
        long since = atMillis - last;
        if (since < 0 || since >= windowMillis) {
            last = Math.floorDiv(atMillis, windowMillis) * windowMillis;
        }
        return last;
    }
}
