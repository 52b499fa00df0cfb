package io.tallyward.connector.kafka;

import java.time.Duration;
import java.util.Locale;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/** Says how restoring goes: at its beginning, every ten seconds, and at its end. Nothing of shards without state. */
final class RestoreLog {

    private static final Logger LOG = LoggerFactory.getLogger(RestoreLog.class);

    static final Duration EVERY = Duration.ofSeconds(10);

    private final ShardGroup group;
    private long saidMillis;

    RestoreLog(ShardGroup group) {
        this.group = group;
    }

    void begins(Restoration restoration, long nowMillis) {
        saidMillis = nowMillis;
        if (restoration.total() > 0) {
            LOG.info(
                    "{}: restoring shard {} from {}-{}, {} offsets to read",
                    group.id(),
                    restoration.partition(),
                    group.stateTopic(),
                    restoration.partition(),
                    restoration.total());
        }
    }

    void goesOn(Restoration restoration, long nowMillis) {
        if (Elapsed.since(saidMillis, nowMillis, EVERY)) {
            saidMillis = nowMillis;
            LOG.info(
                    "{}: restoring shard {}: {} of {} offsets read, {} records, {} MB",
                    group.id(),
                    restoration.partition(),
                    restoration.total() - restoration.remaining(),
                    restoration.total(),
                    restoration.records(),
                    megabytes(restoration.bytes()));
        }
    }

    void ends(Restoration restoration, long nowMillis) {
        if (restoration.total() > 0) {
            double seconds = Math.max(1, nowMillis - restoration.startedMillis()) / 1000.0;
            LOG.info(
                    "{}: restored shard {}: {} records, {} MB in {} s, {} records/s",
                    group.id(),
                    restoration.partition(),
                    restoration.records(),
                    megabytes(restoration.bytes()),
                    String.format(Locale.ROOT, "%.1f", seconds),
                    Math.round(restoration.records() / seconds));
        }
    }

    private static String megabytes(long bytes) {
        return String.format(Locale.ROOT, "%.1f", bytes / 1e6);
    }
}
