package io.tallyward.demo.story;

import java.time.Instant;
import java.util.List;

/** What is true of one experiment. Its plan is the resource {@code <experiment>.yaml} beside this interface. */
public interface Story {

    /** Name of the experiment. */
    String experiment();

    /** Names of the variants in the order of the plan, the control first. */
    List<String> variants();

    /** Whether every view is a trial, rather than every unit. */
    default boolean countsByView() {
        return false;
    }

    /** The first moment that is no longer part of the run. */
    default Instant runEnd() {
        return Northwater.END;
    }

    /** When the planned split changes, ascending; empty when it never does. */
    default List<Instant> splitChanges() {
        return List.of();
    }

    /** How many units take part; enough for a comparison of two variants unless a story needs more. */
    default int units() {
        return 40_000;
    }

    /**
     * Share of each variant, in the order of {@link #variants()}, after that many changes of the split; even between two
     * variants unless a story says otherwise.
     */
    default double[] shares(int epoch) {
        return new double[] {0.5, 0.5};
    }

    /** Probability that a unit clicks in time when it is first shown a variant at a moment. */
    double clickRate(int variant, long atMillis, Device device);

    /** Whether the pipeline loses this view. */
    default boolean losesView(int variant, long atMillis, Device device) {
        return false;
    }

    /** What a monitor ought to conclude. */
    Expectation expectation();

    /** Index of the allocation epoch at a moment: 0 before the first change of the split. */
    default int epochAt(long atMillis) {
        return (int) splitChanges().stream()
                .filter(change -> change.toEpochMilli() <= atMillis)
                .count();
    }

    /** Whether an event time is part of the run: closed at the start, open at the end. */
    default boolean runsAt(long atMillis) {
        return atMillis >= Northwater.START.toEpochMilli() && atMillis < runEnd().toEpochMilli();
    }
}
