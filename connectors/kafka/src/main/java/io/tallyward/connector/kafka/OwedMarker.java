package io.tallyward.connector.kafka;

import java.util.Optional;

/**
 * What a partition with an open transaction should have been told by the transaction's coordinator. A broker that goes down
 * while a transaction is being ended may come back, not know the partitions yet, and put the matter down as done: the
 * decision stands in the coordinator's log, and some partitions never hear of it.
 */
enum OwedMarker {
    /** The coordinator still has it in hand: it is open, or is just being ended. */
    NONE,

    /** It was committed. */
    COMMIT,

    /** It was aborted. */
    ABORT,

    /** The coordinator's log no longer tells. */
    UNKNOWN;

    /**
     * Reads it off what the coordinator has put down. With numbered transactions (transaction version 2, KIP-890) the end of
     * every transaction raises the producer's epoch by one, so that an epoch belongs to one transaction:
     * <ul>
     *   <li>the last one ended was aborted, and its epoch is that of the open one: it was aborted;
     *   <li>the last one ended was committed: it was committed, whether it is the open one or a later one, because a
     *       {@link Transactions} begins another under the same id only when the one before was committed;
     *   <li>anything else does not tell.
     * </ul>
     *
     * @param numbered whether the brokers number transactions
     */
    static OwedMarker of(OpenTransaction open, Optional<CoordinatedTransaction> coordinator, boolean numbered) {
        if (coordinator.isEmpty()) {
            return UNKNOWN;
        }
        CoordinatedTransaction known = coordinator.get();
        if (known.producerId() != open.producerId()) {
            return UNKNOWN;
        }
        return switch (known.state()) {
            case ONGOING, PREPARE_COMMIT, PREPARE_ABORT, PREPARE_EPOCH_FENCE -> NONE;
            case COMPLETE_COMMIT -> numbered && known.epoch() > open.epoch() ? COMMIT : UNKNOWN;
            case COMPLETE_ABORT -> numbered && known.epoch() == open.epoch() + 1 ? ABORT : UNKNOWN;
            case EMPTY, UNKNOWN -> UNKNOWN;
        };
    }
}
