package io.tallyward.service.explain;

import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Verdict;

/**
 * Where one challenger stands.
 *
 * @param look its last look; null before the first
 * @param at the record of that look; null before the first
 * @param verdict the verdict as told
 * @param held the verdict that waits for trust to return; null when none does
 */
record Standing(Comparison look, DecisionRecord at, Verdict verdict, Verdict held) {

    static final Standing WAITING = new Standing(null, null, Verdict.WAITING, null);

    Standing after(Comparison next, DecisionRecord record) {
        return new Standing(next, record, next.verdict(), next.held());
    }

    /** A verdict that was held is told. */
    Standing released() {
        return held == null ? this : new Standing(look, at, held, null);
    }

    /** The run is over and no look was possible. */
    Standing ended(Verdict how, boolean sound) {
        if (verdict.settled() || held != null) {
            return this;
        }
        return sound ? new Standing(look, at, how, null) : new Standing(look, at, verdict, how);
    }
}
