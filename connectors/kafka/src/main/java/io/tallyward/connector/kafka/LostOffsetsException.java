package io.tallyward.connector.kafka;

import io.tallyward.engine.shard.RefusedStateException;

/** There is a shard's state and nothing that says how far its input was read for it: to go on anywhere would be to guess. */
public final class LostOffsetsException extends RefusedStateException {

    private static final long serialVersionUID = 1L;

    LostOffsetsException(ShardGroup group, Object inputs) {
        super("consumer group " + group.id() + ": no committed offsets for " + inputs + " on " + group.broker()
                + ", but counts in " + group.stateTopic()
                + " (expected: both or neither; the broker forgets the offsets of a"
                + " topic that is deleted, and of a group that is stopped for longer than offsets.retention.minutes): set the"
                + " offsets with kafka-consumer-groups.sh --reset-offsets to where reading shall go on, or start under a new"
                + " name");
    }
}
