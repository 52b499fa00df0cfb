package io.tallyward.demo.chaos;

import java.util.Locale;

/** What is done to a monitor or its broker. */
public enum Fault {
    /** An instance is killed without warning, and another is started in its place. */
    KILL(3),
    /** An instance is told to stop, stops in good order, and another is started in its place. */
    TERM(2),
    /** An instance is frozen for longer than its group waits for it, and thaws believing that nothing has happened. */
    ZOMBIE(3),
    /** One more instance joins. */
    ADD(1),
    /** An instance is told to stop and is not replaced. */
    REMOVE(1),
    /** The broker is stopped in good order and comes back after a while. */
    BROKER_STOP(1),
    /** The broker is killed without warning and comes back after a while. */
    BROKER_KILL(1);

    private final int weight;

    Fault(int weight) {
        this.weight = weight;
    }

    /** How often it comes among as many faults as all weights together. */
    int weight() {
        return weight;
    }

    /** Whether it is done to the broker and not to an instance. */
    boolean concernsBroker() {
        return this == BROKER_STOP || this == BROKER_KILL;
    }

    /** As it is shown: {@code broker-kill}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT).replace('_', '-');
    }
}
