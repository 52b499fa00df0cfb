package io.tallyward.connector.kafka;

import org.apache.kafka.clients.admin.TransactionState;

/**
 * What a transaction coordinator knows of a transactional id.
 *
 * @param transactionalId the id
 * @param state of its last transaction
 * @param producerId the producer's number
 * @param epoch the producer's epoch, which the end of a transaction raises by one
 */
record CoordinatedTransaction(String transactionalId, TransactionState state, long producerId, int epoch) {

    /** Whether the last transaction has been ended, and nothing has been begun since. */
    boolean ended() {
        return state == TransactionState.COMPLETE_COMMIT || state == TransactionState.COMPLETE_ABORT;
    }

    /** Whether the decision has been taken and the partitions are being told. */
    boolean ending() {
        return state == TransactionState.PREPARE_COMMIT
                || state == TransactionState.PREPARE_ABORT
                || state == TransactionState.PREPARE_EPOCH_FENCE;
    }
}
