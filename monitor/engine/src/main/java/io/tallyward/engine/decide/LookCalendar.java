package io.tallyward.engine.decide;

import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.LookSchedule.AtFractions;
import io.tallyward.engine.plan.LookSchedule.Every;
import io.tallyward.engine.plan.Plan;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.time.Instant;
import java.util.Optional;

/** When the next look at one challenger is due. A due look stays due until it is taken. */
final class LookCalendar {

    private final LookSchedule schedule;
    private final long runFrom;
    private long nextDue;
    private int nextFraction;
    private boolean waiting;

    LookCalendar(Plan plan) {
        schedule = plan.looks();
        runFrom = plan.run().from().toEpochMilli();
        if (schedule instanceof Every every) {
            nextDue = runFrom + every.interval().toMillis();
        }
    }

    /**
     * Whether a look is due at the end of a window, given the information fraction then. Where the planned fractions are used
     * up before the minimum run is over, one more look is due once it is: the benefit tail has spent nothing yet.
     */
    boolean isDue(long windowEnd, double fraction, boolean minimumRunOver) {
        if (schedule instanceof AtFractions fractions) {
            return nextFraction < fractions.fractions().size()
                    ? fraction >= fractions.fractions().get(nextFraction)
                    : minimumRunOver;
        }
        return windowEnd >= nextDue;
    }

    /** That a look at a moment comes later than it was due, in words; empty where looks are due by information. */
    Optional<String> late(long windowEnd) {
        return schedule instanceof Every && windowEnd > nextDue
                ? Optional.of("due since " + Instant.ofEpochMilli(nextDue) + ", it had to wait until "
                        + Instant.ofEpochMilli(windowEnd))
                : Optional.empty();
    }

    /** Takes note that a look was taken: the next one is the first planned after it. */
    void taken(long windowEnd, double fraction) {
        waiting = false;
        if (schedule instanceof AtFractions fractions) {
            while (nextFraction < fractions.fractions().size()
                    && fraction >= fractions.fractions().get(nextFraction)) {
                nextFraction++;
            }
        } else if (schedule instanceof Every every) {
            long interval = every.interval().toMillis();
            nextDue = runFrom + (Math.floorDiv(windowEnd - runFrom, interval) + 1) * interval;
        }
    }

    /** Takes note that a due look has to wait; returns whether it has only now begun to wait. */
    boolean delayed() {
        boolean begun = !waiting;
        waiting = true;
        return begun;
    }

    void write(DataOutput out) throws IOException {
        out.writeLong(nextDue);
        out.writeInt(nextFraction);
        out.writeBoolean(waiting);
    }

    void read(DataInput in) throws IOException {
        nextDue = in.readLong();
        nextFraction = in.readInt();
        waiting = in.readBoolean();
    }
}
