package io.tallyward.connector.kafka;

import java.util.HashMap;
import java.util.Map;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Says once what is wrong and once that it is over, however many workers notice and however often they try. Thread-safe.
 */
final class OutageLog {

    private static final Logger LOG = LoggerFactory.getLogger(OutageLog.class);

    private final String who;
    private final Map<Integer, String> ongoing = new HashMap<>();

    OutageLog(String who) {
        this.who = who;
    }

    /** A worker met an obstacle; logged unless this or another worker has just said the same. */
    synchronized void met(int worker, String sentence) {
        boolean said = ongoing.containsValue(sentence);
        ongoing.put(worker, sentence);
        if (!said) {
            LOG.warn("{}: {}; trying again by itself", who, sentence);
        }
    }

    /** A worker is doing its work again. */
    synchronized void over(int worker) {
        if (ongoing.remove(worker) != null && ongoing.isEmpty()) {
            LOG.info("{}: working again", who);
        }
    }
}
