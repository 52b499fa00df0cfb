package io.tallyward.service.rehearse;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.util.ArrayList;
import java.util.List;

/**
 * Reads the decision records of one run as their owner would, and stops reading once every verdict is told. Whatever a
 * rehearsal reports about a run is taken from here. Not thread-safe.
 */
final class Follower {

    private final Plan plan;
    private final List<Challenger> challengers = new ArrayList<>();
    private int looks;
    private boolean mismatch;
    private long endMillis;
    private boolean over;

    Follower(Plan plan) {
        this.plan = plan;
        for (Variant variant : plan.challengers()) {
            challengers.add(new Challenger(plan.variantIndex(variant.name()), variant.name()));
        }
        endMillis = plan.run().end().toEpochMilli();
    }

    /** Where one challenger stands. */
    static final class Challenger {

        private final int variant;
        private final String name;
        private final List<Comparison> looks = new ArrayList<>();
        private Verdict held;
        private Ending ending;

        private Challenger(int variant, String name) {
            this.variant = variant;
            this.name = name;
        }

        /** Position in the plan. */
        int variant() {
            return variant;
        }

        /** The looks taken at it, in order. */
        List<Comparison> looks() {
            return looks;
        }

        boolean settled() {
            return ending != null;
        }

        /** How it ended; withheld as long as no verdict was told. */
        Ending ending() {
            return ending == null ? Ending.WITHHELD : ending;
        }

        private void take(Comparison comparison) {
            looks.add(comparison);
            held = comparison.held();
            settle(comparison.verdict());
        }

        private void settle(Verdict verdict) {
            if (ending == null && verdict != null && verdict.settled()) {
                ending = Ending.of(verdict);
                held = null;
            }
        }
    }

    /** Takes note of a record; one after all verdicts are told changes nothing. */
    void take(DecisionRecord record) {
        if (over) {
            return;
        }
        mismatch |= record.trust() == Trust.MISMATCH;
        looks += record.occasion() == Occasion.LOOK ? 1 : 0;
        boolean sound = record.trust() == Trust.SOUND;
        if (sound) {
            challengers.forEach(challenger -> challenger.settle(challenger.held));
        }
        for (Comparison comparison : record.comparisons()) {
            of(comparison.variant()).take(comparison);
        }
        if (sound && record.windowEnd().equals(plan.run().end())) {
            challengers.forEach(challenger -> challenger.settle(Verdict.EXHAUSTED));
        }
        over = challengers.stream().allMatch(Challenger::settled);
        if (over) {
            endMillis = record.windowEnd().toEpochMilli();
        }
    }

    private Challenger of(String name) {
        return challengers.stream()
                .filter(challenger -> challenger.name.equals(name))
                .findFirst()
                .orElseThrow();
    }

    /** Whether every verdict is told. */
    boolean over() {
        return over;
    }

    List<Challenger> challengers() {
        return challengers;
    }

    /** How often the owner was shown a look, at whichever challengers. */
    int looks() {
        return looks;
    }

    /** Whether the split check ever raised an alarm. */
    boolean mismatch() {
        return mismatch;
    }

    /** When the last verdict was told; the end of the run if one never was. */
    long endMillis() {
        return endMillis;
    }
}
