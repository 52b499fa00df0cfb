package io.tallyward.engine.shard;

/**
 * Stored state does not go with the settings at hand: it was made under another plan, key or number of partitions. The
 * message is a sentence for an operator: what is wrong and what to do.
 */
public abstract class RefusedStateException extends IllegalStateException {

    private static final long serialVersionUID = 1L;

    protected RefusedStateException(String sentence) {
        super(sentence);
    }
}
