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

    /** The condition that each worker met last; guarded by this object's monitor. */
    private final Map<Integer, String> ongoing = new HashMap<>();

    OutageLog(String who) {
        this.who = who;
    }

    /** A worker met an obstacle; logged unless this or another worker has already met the same condition. */
    synchronized void met(int worker, BrokerSentence sentence) {
        boolean said = ongoing.containsValue(sentence.condition());
        ongoing.put(worker, sentence.condition());
        if (!said) {
            LOG.warn("{}: {}; trying again by itself", who, sentence.text());
        }
    }

    /** A worker is doing its work again. */
    synchronized void over(int worker) {
        if (ongoing.remove(worker) != null && ongoing.isEmpty()) {
            LOG.info("{}: working again", who);
        }
    }
}
