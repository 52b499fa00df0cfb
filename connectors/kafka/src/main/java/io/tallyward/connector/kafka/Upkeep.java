package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.Optional;
import java.util.concurrent.CompletableFuture;
import java.util.concurrent.CompletionException;
import java.util.concurrent.Executor;
import java.util.function.Supplier;
import org.apache.kafka.common.KafkaException;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Sees every few seconds whether the topics are still what they were, and whether a transaction hangs. The brokers are asked
 * beside the worker's thread: one of several that is down answers only after seconds, during which counting goes on. What
 * follows from the answers is done by the worker, with its own consumer and producer.
 */
final class Upkeep {

    /** How long after an answer the next question is put. */
    static final Duration EVERY = Duration.ofSeconds(10);

    private static final Logger LOG = LoggerFactory.getLogger(Upkeep.class);

    private final InputIdentity identity;
    private final TransactionMender mender;
    private final Executor aside;
    private CompletableFuture<Answer> asked;
    private long lastMillis;

    /** @param aside runs a question of up to some seconds, one at a time */
    Upkeep(InputIdentity identity, TransactionMender mender, Executor aside, long nowMillis) {
        this.identity = identity;
        this.mender = mender;
        this.aside = aside;
        this.lastMillis = nowMillis;
    }

    private record Answer(InputIdentity.Found topics, TransactionMender.Sighting transactions) {}

    /**
     * Takes an answer if there is one, asks if it is time to, and does not wait.
     *
     * @param answering whether the brokers answer at all
     * @param caretaker whether this worker sees to what nobody else does
     * @throws BrokerException if an input topic is not what it was
     */
    void see(long nowMillis, boolean answering, boolean caretaker) {
        if (asked == null && answering && Elapsed.since(lastMillis, nowMillis, EVERY)) {
            Supplier<TransactionMender.Sighting> transactions = mender.question();
            asked = CompletableFuture.supplyAsync(() -> new Answer(identity.find(), transactions.get()), aside);
        }
        if (asked != null && asked.isDone()) {
            lastMillis = nowMillis;
            Optional<Answer> answer = answer();
            answer.ifPresent(found -> identity.verify(found.topics()));
            answer.ifPresent(found -> mender.mend(found.transactions(), caretaker));
        }
    }

    /** Empty when the brokers did not answer: they are asked again. */
    private Optional<Answer> answer() {
        CompletableFuture<Answer> given = asked;
        asked = null;
        try {
            return Optional.of(given.join());
        } catch (CompletionException failure) {
            if (failure.getCause() instanceof KafkaException unanswered) {
                LOG.debug("what the topics and transactions are could not be found out", unanswered);
                return Optional.empty();
            }
            throw failure;
        }
    }
}
