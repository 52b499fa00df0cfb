package io.tallyward.engine.shard;

import java.util.Objects;

/**
 * One change of a shard's durable state: the new value of a key, or its removal. The host keeps changes in order in a
 * compacted log of the shard's own and hands the survivors back, in the same order, when the shard starts again.
 *
 * @param key never null; opaque to the host
 * @param value the packed value, at most about 512 kB; null removes the key
 */
public record StateChange(byte[] key, byte[] value) {

    public StateChange {
        Objects.requireNonNull(key, "key");
    }
}
