package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.HashMap;
import java.util.HashSet;
import java.util.List;
import java.util.Map;
import java.util.Set;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Says what is wrong and that it is over, however many workers notice and however often they try: once when it has lasted
 * for a moment, again at growing intervals for as long as it lasts (after 5 min, 30 min, then every 6 h), and once at its end. What heals
 * within moments is not said at all: a service that starts for the first time waits for topics that another part of it is
 * just creating. Thread-safe.
 */
final class OutageLog {

    private static final Logger LOG = LoggerFactory.getLogger(OutageLog.class);

    /** How long work must have been impossible before it is said. */
    private static final Duration MOMENT = Duration.ofSeconds(3);

    /** Between what was said and its repetition. */
    private static final List<Duration> SILENCES =
            List.of(Duration.ofMinutes(5), Duration.ofMinutes(30), Duration.ofHours(6));

    private final String who;
    private final InstantSource clock;

    /** The condition that each worker met last; guarded by this object's monitor. */
    private final Map<Integer, String> ongoing = new HashMap<>();

    /** The conditions that were said since all was last well; guarded by this object's monitor. */
    private final Set<String> said = new HashSet<>();

    private Instant lastWell;

    /** How often it was repeated since all was last well; guarded by this object's monitor. */
    private int repeated;

    private Instant lastSaid = Instant.EPOCH;

    OutageLog(String who, InstantSource clock) {
        this.who = who;
        this.clock = clock;
        lastWell = clock.instant();
    }

    /** A worker met an obstacle; logged once it has lasted, unless the same was said before. */
    synchronized void met(int worker, BrokerSentence sentence) {
        ongoing.put(worker, sentence.condition());
        Instant now = clock.instant();
        Duration lasted = Duration.between(lastWell, now);
        if (lasted.compareTo(MOMENT) >= 0 && said.add(sentence.condition())) {
            lastSaid = now;
            LOG.warn("{}: {}; trying again by itself", who, sentence.text());
        } else if (!said.isEmpty() && Duration.between(lastSaid, now).compareTo(silence()) >= 0) {
            lastSaid = now;
            repeated++;
            LOG.warn("{}: for {} min now: {}; trying again by itself", who, lasted.toMinutes(), sentence.text());
        }
    }

    private Duration silence() {
        return SILENCES.get(Math.min(repeated, SILENCES.size() - 1));
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
            repeated = 0;
            LOG.info("{}: working again", who);
        }
    }
}
