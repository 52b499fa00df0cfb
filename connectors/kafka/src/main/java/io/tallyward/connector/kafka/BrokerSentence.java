package io.tallyward.connector.kafka;

import org.apache.kafka.clients.consumer.CommitFailedException;
import org.apache.kafka.common.config.ConfigException;
import org.apache.kafka.common.errors.AuthenticationException;
import org.apache.kafka.common.errors.AuthorizationException;
import org.apache.kafka.common.errors.DisconnectException;
import org.apache.kafka.common.errors.FencedInstanceIdException;
import org.apache.kafka.common.errors.IllegalGenerationException;
import org.apache.kafka.common.errors.InvalidProducerEpochException;
import org.apache.kafka.common.errors.NetworkException;
import org.apache.kafka.common.errors.ProducerFencedException;
import org.apache.kafka.common.errors.RebalanceInProgressException;
import org.apache.kafka.common.errors.TimeoutException;
import org.apache.kafka.common.errors.UnknownMemberIdException;
import org.apache.kafka.common.errors.UnknownTopicOrPartitionException;

/**
 * What the client library throws, as one sentence: what is wrong, where, what to do.
 *
 * @param condition the same for every sentence about the same condition, whatever its details
 * @param text the sentence
 */
record BrokerSentence(String condition, String text) {

    static BrokerSentence of(Throwable failure, String broker) {
        if (failure instanceof BrokerException) {
            return new BrokerSentence(failure.getMessage(), failure.getMessage());
        }
        if (takenOver(failure)) {
            return sentence(
                    "the last step was refused by the broker at " + broker
                            + " because its partitions or its transactions belong to another member by now",
                    "",
                    "nothing to do, unless it keeps coming, which means that two instances run under one instance name");
        }
        return outside(failure, "the broker at " + broker, detail(failure));
    }

    private static BrokerSentence outside(Throwable failure, String broker, String detail) {
        if (find(failure, AuthenticationException.class) != null) {
            return sentence(
                    broker + " refuses the credentials",
                    detail,
                    "correct the security settings among the client properties");
        }
        if (find(failure, AuthorizationException.class) != null) {
            return sentence(
                    broker + " does not permit this", detail, "grant the permission to the service's principal");
        }
        if (find(failure, UnknownTopicOrPartitionException.class) != null) {
            return sentence(
                    broker + " does not know a topic", detail, "create it or correct its name in the configuration");
        }
        if (find(failure, ConfigException.class) != null) {
            return sentence(
                    "no client can be set up for " + broker,
                    detail,
                    "correct the bootstrap servers or the client properties");
        }
        if (unanswered(failure)) {
            return sentence(broker + " does not answer", detail, "start it, or correct the bootstrap servers");
        }
        return sentence(broker + " does not do what is needed", detail, "see the broker's log");
    }

    private static BrokerSentence sentence(String condition, String detail, String remedy) {
        String inBrackets = detail.isEmpty() ? "" : " (" + detail + ")";
        return new BrokerSentence(condition, condition + inBrackets + ": " + remedy);
    }

    /** Whether the group has moved on without this member, which heals by restoring. */
    static boolean takenOver(Throwable failure) {
        return find(failure, CommitFailedException.class) != null
                || find(failure, RebalanceInProgressException.class) != null
                || find(failure, IllegalGenerationException.class) != null
                || find(failure, UnknownMemberIdException.class) != null
                || find(failure, FencedInstanceIdException.class) != null
                || find(failure, ProducerFencedException.class) != null
                || find(failure, InvalidProducerEpochException.class) != null;
    }

    static <T extends Throwable> T find(Throwable failure, Class<T> type) {
        for (Throwable cause = failure; cause != null; cause = cause.getCause()) {
            if (type.isInstance(cause)) {
                return type.cast(cause);
            }
        }
        return null;
    }

    private static boolean unanswered(Throwable failure) {
        return find(failure, TimeoutException.class) != null
                || find(failure, DisconnectException.class) != null
                || find(failure, NetworkException.class) != null;
    }

    /** The innermost message, which is the one that says something. */
    private static String detail(Throwable failure) {
        String detail = failure.getClass().getSimpleName();
        for (Throwable cause = failure; cause != null; cause = cause.getCause()) {
            if (cause.getMessage() != null) {
                detail = cause.getMessage();
            }
        }
        return detail.strip().replaceAll("\\s+", " ").replaceAll("[.:]$", "");
    }
}
