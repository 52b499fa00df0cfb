package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.Set;
import org.apache.kafka.clients.consumer.CommitFailedException;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.config.ConfigException;
import org.apache.kafka.common.errors.SaslAuthenticationException;
import org.apache.kafka.common.errors.TimeoutException;
import org.apache.kafka.common.errors.TopicAuthorizationException;
import org.junit.jupiter.api.Test;

class BrokerSentenceTest {

    @Test
    void saysWhatIsWrongWhereAndWhatToDo() {
        assertEquals(
                "the broker at b:9092 does not answer (Timed out waiting for a node assignment. Call: describeTopics):"
                        + " start it, or correct the bootstrap servers",
                sentence(new TimeoutException("Timed out waiting for a node assignment. Call: describeTopics")));
        assertEquals(
                "the broker at b:9092 refuses the credentials (wrong password): correct the security settings among the"
                        + " client properties",
                sentence(new KafkaException("wrapped", new SaslAuthenticationException("wrong password"))));
        assertEquals(
                "the broker at b:9092 does not permit this (Not authorized to access topics: [views]): grant the"
                        + " permission to the service's principal",
                sentence(new TopicAuthorizationException(Set.of("views"))));
        assertEquals(
                "no client can be set up for the broker at b:9092 (No resolvable bootstrap urls given in"
                        + " bootstrap.servers): correct the bootstrap servers or the client properties",
                sentence(new KafkaException(
                        "Failed to construct kafka consumer",
                        new ConfigException("No resolvable bootstrap urls given in bootstrap.servers"))));
    }

    @Test
    void countsDetailsOfOneOutageAsOneCondition() {
        assertEquals(
                BrokerSentence.of(new TimeoutException("while fetching"), "b:9092")
                        .condition(),
                BrokerSentence.of(new TimeoutException("while committing"), "b:9092")
                        .condition());
    }

    @Test
    void keepsSentencesThatAreOnesAlready() {
        assertEquals("do this", sentence(new BrokerException("do this")));
    }

    @Test
    void tellsBeingReplacedFromAnOutage() {
        assertTrue(BrokerSentence.takenOver(new CommitFailedException()));
        assertFalse(BrokerSentence.takenOver(new TimeoutException()));
        assertTrue(sentence(new CommitFailedException()).contains("belong to another member by now"));
    }

    private static String sentence(Throwable failure) {
        return BrokerSentence.of(failure, "b:9092").text();
    }
}
