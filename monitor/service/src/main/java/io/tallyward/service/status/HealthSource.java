package io.tallyward.service.status;

import java.util.Objects;

/** A part of the process that knows how it is. Asked from several threads; answers at once, without I/O. */
@FunctionalInterface
public interface HealthSource {

    /** How the part is now. */
    Health health();

    /**
     * How a part is.
     *
     * @param name the part, as in {@code kafka}
     * @param state its state
     * @param detail one sentence: what is the case and, if anything is wrong, what to do
     * @param noted whether the detail should be seen although the part works
     */
    record Health(String name, State state, String detail, boolean noted) {

        /** A part whose detail says nothing special while it works. */
        public Health(String name, State state, String detail) {
            this(name, state, detail, false);
        }

        public Health {
            Objects.requireNonNull(name, "name");
            Objects.requireNonNull(state, "state");
            Objects.requireNonNull(detail, "detail");
        }
    }

    /** The states of a part; the names are published and stable. */
    enum State {
        /** It works. */
        OK,
        /** It is on its way to work, as while state is restored. */
        STARTING,
        /** It does not work now; it goes on trying. */
        DOWN,
        /** An invariant does not hold; only a new process helps. */
        BROKEN
    }
}
