package io.tallyward.connector.webhook;

import io.tallyward.engine.record.Notice;
import java.time.Instant;

/** Makes one attempt to deliver a notice. */
@FunctionalInterface
public interface NoticeTransport {

    /**
     * Tries once, for a bounded time, and reports rather than throws.
     *
     * @param notice what to deliver; its id is the same at every attempt
     * @param now the time of the attempt
     * @throws InterruptedException if the thread is interrupted; whether the notice arrived is then unknown
     */
    AttemptResult attempt(Notice notice, Instant now) throws InterruptedException;
}
