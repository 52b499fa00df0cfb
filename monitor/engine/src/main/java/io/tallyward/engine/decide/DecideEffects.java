package io.tallyward.engine.decide;

import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.shard.StateChange;
import java.util.List;

/**
 * What a DECIDE shard wants made durable, all in one transaction with the offsets of the tallies it has read.
 *
 * @param state changes of its own state
 * @param decisions new decision records, in order
 * @param notices what people are to be told, in order
 */
public record DecideEffects(List<StateChange> state, List<DecisionRecord> decisions, List<Notice> notices) {

    public DecideEffects {
        state = List.copyOf(state);
        decisions = List.copyOf(decisions);
        notices = List.copyOf(notices);
    }
}
