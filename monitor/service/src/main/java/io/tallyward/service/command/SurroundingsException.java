package io.tallyward.service.command;

/**
 * The input is fine but something around the process is not: a broker, a port, a disk. The message is a sentence for an
 * operator: what is wrong, where, and what to do.
 */
public final class SurroundingsException extends Exception {

    private static final long serialVersionUID = 1L;

    public SurroundingsException(String sentence) {
        super(sentence);
    }

    public SurroundingsException(String sentence, Throwable cause) {
        super(sentence, cause);
    }
}
