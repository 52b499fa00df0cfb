package io.tallyward.connector.webhook;

import io.tallyward.engine.record.Notice;
import java.time.Instant;
import java.util.Comparator;

/** One notice on its way; guarded by the lock of its queue. */
final class Delivery {

    /** By due time, then by age. */
    static final Comparator<Delivery> ORDER =
            Comparator.comparing((Delivery delivery) -> delivery.dueAt).thenComparingLong(delivery -> delivery.order);

    final Notice notice;
    final Instant submittedAt;
    final long order;
    Runnable settled;
    Instant dueAt;
    int attempts;

    Delivery(Notice notice, Runnable settled, Instant submittedAt, Instant dueAt, long order) {
        this.notice = notice;
        this.settled = settled;
        this.submittedAt = submittedAt;
        this.dueAt = dueAt;
        this.order = order;
    }
}
