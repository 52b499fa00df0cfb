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

/** Turns what the client library throws into one sentence: what is wrong, where, what to do. */
final class BrokerSentence {

    private BrokerSentence() {}

    static String of(Throwable failure, String broker) {
        if (failure instanceof BrokerException) {
            return failure.getMessage();
        }
        if (takenOver(failure)) {
            return "the last step was refused by the broker at " + broker
                    + " because its partitions or its transactions belong to another member by now: nothing to do,"
                    + " unless it keeps coming, which means that two instances run under one instance name";
        }
        if (find(failure, AuthenticationException.class) != null) {
            return "the broker at " + broker + " refuses the credentials (" + detail(failure)
                    + "): correct the security settings among the client properties";
        }
        if (find(failure, AuthorizationException.class) != null) {
            return "the broker at " + broker + " does not permit this (" + detail(failure)
                    + "): grant the permission to the service's principal";
        }
        if (find(failure, UnknownTopicOrPartitionException.class) != null) {
            return "a topic is missing at " + broker + " (" + detail(failure)
                    + "): create it or correct its name in the configuration";
        }
        if (find(failure, ConfigException.class) != null) {
            return "the Kafka client for " + broker + " cannot be set up (" + detail(failure)
                    + "): correct the bootstrap servers or the client properties";
        }
        if (unanswered(failure)) {
            return "the broker at " + broker + " does not answer (" + detail(failure)
                    + "): start it, or correct the bootstrap servers";
        }
        return "the broker at " + broker + " does not do what is needed (" + detail(failure)
                + "): see the broker's log";
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
