package io.tallyward.engine.count;

import io.tallyward.engine.shard.StateChange;
import java.util.List;

/**
 * What a COUNT shard wants made durable, all in one transaction with the offsets of the records it has read.
 *
 * @param state changes of its own state, in order
 * @param tallies what it has sealed, in order
 */
public record CountEffects(List<StateChange> state, List<TallyUpdate> tallies) {

    public CountEffects {
        state = List.copyOf(state);
        tallies = List.copyOf(tallies);
    }
}
