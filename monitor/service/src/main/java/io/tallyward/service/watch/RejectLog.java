package io.tallyward.service.watch;

import io.tallyward.engine.event.RejectReason;
import java.util.Set;
import java.util.concurrent.ConcurrentHashMap;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/** Logs the first rejected record of each kind in full and leaves the rest to counters and topic. Thread-safe. */
final class RejectLog {

    private static final Logger LOG = LoggerFactory.getLogger(RejectLog.class);

    private final String topic;
    private final Set<RejectReason> said = ConcurrentHashMap.newKeySet();

    /** @param topic where rejected records are kept */
    RejectLog(String topic) {
        this.topic = topic;
    }

    void rejected(String origin, RejectReason reason, String detail) {
        if (said.add(reason)) {
            LOG.warn(
                    "Rejected {} as {}: {}. Further ones of this kind are counted and kept in {}, not logged.",
                    origin,
                    reason.code(),
                    detail,
                    topic);
        }
    }
}
