package io.tallyward.service.watch;

import io.tallyward.engine.event.RejectReason;
import java.util.Set;
import java.util.concurrent.ConcurrentHashMap;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Says of bad traffic once what is wrong and leaves the rest to counters and topics, however many partitions see it.
 * Thread-safe.
 */
final class TrafficLog {

    private static final Logger LOG = LoggerFactory.getLogger(TrafficLog.class);

    private final String rejectsTopic;
    private final Set<RejectReason> rejected = ConcurrentHashMap.newKeySet();
    private final Set<String> parserFailures = ConcurrentHashMap.newKeySet();
    private final Set<String> unkeyed = ConcurrentHashMap.newKeySet();

    /** @param rejectsTopic where rejected records are kept */
    TrafficLog(String rejectsTopic) {
        this.rejectsTopic = rejectsTopic;
    }

    /** A record was rejected. */
    void rejected(String origin, RejectReason reason, String detail) {
        if (rejected.add(reason)) {
            LOG.warn(
                    "Rejected {} as {}: {}. Further ones of this kind are counted and kept in {}, not logged.",
                    origin,
                    reason.code(),
                    detail,
                    rejectsTopic);
        }
    }

    /** The parser met something that it was not made for. */
    void parserFailed(String origin, String failure) {
        if (parserFailures.add(failure)) {
            LOG.error(
                    "The parser failed at {} with {}: the record is rejected and kept in {}. Please report it with that"
                            + " record; further ones are counted, not logged.",
                    origin,
                    failure,
                    rejectsTopic);
        }
    }

    /** A partition has found a topic keyed by something other than the unit, or keyed by it again. */
    void keying(String topic, boolean byUnit) {
        if (byUnit && unkeyed.remove(topic)) {
            LOG.info("Topic {} is keyed by unit again.", topic);
        } else if (!byUnit && unkeyed.add(topic)) {
            LOG.error(
                    "Topic {} is not keyed by unit: events of one unit are spread over its partitions, so that units are"
                            + " counted more than once and clicks miss their views. Key the topic by unit.",
                    topic);
        }
    }
}
