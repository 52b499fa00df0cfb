package io.tallyward.connector.kafka;

/** A shard broke an invariant; the message says which shard and where it was. */
final class ShardFailure extends RuntimeException {

    private static final long serialVersionUID = 1L;

    ShardFailure(String where, Throwable cause) {
        super(where, cause);
    }
}
