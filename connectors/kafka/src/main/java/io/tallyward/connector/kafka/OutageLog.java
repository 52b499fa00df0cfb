package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.HashMap;
import java.util.HashSet;
import java.util.Map;
import java.util.Set;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Says once what is wrong and once that it is over, however many workers notice and however often they try. What heals
 * within moments is not said at all: a service that starts for the first time waits for topics that another part of it is
 * just creating. Thread-safe.
 */
final class OutageLog {

    private static final Logger LOG = LoggerFactory.getLogger(OutageLog.class);

    /** How long work must have been impossible before it is said. */
    private static final Duration MOMENT = Duration.ofSeconds(3);

    private final String who;
    private final InstantSource clock;

    /** The condition that each worker met last; guarded by this object's monitor. */
    private final Map<Integer, String> ongoing = new HashMap<>();

    /** The conditions that were said since all was last well; guarded by this object's monitor. */
    private final Set<String> said = new HashSet<>();

    private Instant lastWell;

    OutageLog(String who, InstantSource clock) {
        this.who = who;
        this.clock = clock;
        lastWell = clock.instant();
    }

    /** A worker met an obstacle; logged once it has lasted, unless the same was said before. */
    synchronized void met(int worker, BrokerSentence sentence) {
        ongoing.put(worker, sentence.condition());
        boolean lasting = Duration.between(lastWell, clock.instant()).compareTo(MOMENT) >= 0;
        if (lasting && said.add(sentence.condition())) {
            LOG.warn("{}: {}; trying again by itself", who, sentence.text());
        }
    }

    /** A worker is doing its work again. */
    synchronized void over(int worker) {
        ongoing.remove(worker);
        if (!ongoing.isEmpty()) {
            return;
        }
        lastWell = clock.instant();
        if (!said.isEmpty()) {
            said.clear();
            LOG.info("{}: working again", who);
        }
    }
}
