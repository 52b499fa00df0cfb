package io.tallyward.connector.kafka;

/**
 * Something outside is not as it has to be: a broker does not answer, a topic is missing, a permission is refused. The
 * message is a sentence for an operator: what is wrong, where, and what to do.
 */
public final class BrokerException extends RuntimeException {

    private static final long serialVersionUID = 1L;

    public BrokerException(String sentence) {
        super(sentence);
    }

    public BrokerException(String sentence, Throwable cause) {
        super(sentence, cause);
    }
}
