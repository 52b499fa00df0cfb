package io.tallyward.connector.webhook;

import java.time.Duration;
import java.util.Locale;
import java.util.Optional;
import java.util.OptionalInt;

/**
 * What one attempt to deliver came to.
 *
 * @param outcome what it means for the notice
 * @param status HTTP status of the answer; empty when there was none
 * @param detail one sentence for people; never a body, a path or a secret; empty when delivered
 * @param retryAfter how long the receiver asked to be left alone; empty when it did not
 */
public record AttemptResult(Outcome outcome, OptionalInt status, String detail, Optional<Duration> retryAfter) {

    /** What an attempt means for the notice. The codes are published and stable. */
    public enum Outcome {
        /** The receiver took it. */
        DELIVERED,
        /** The receiver did not take it, or did not answer: to be tried again. */
        FAILED,
        /** The receiver wants nothing more, ever. */
        GONE;

        /** The published code, as in {@code delivered}. */
        public String code() {
            return name().toLowerCase(Locale.ROOT);
        }
    }

    static AttemptResult delivered(int status) {
        return new AttemptResult(Outcome.DELIVERED, OptionalInt.of(status), "", Optional.empty());
    }

    static AttemptResult gone(int status) {
        String detail = "the receiver answered " + status + ": it wants no more notices";
        return new AttemptResult(Outcome.GONE, OptionalInt.of(status), detail, Optional.empty());
    }

    static AttemptResult refused(int status, Optional<Duration> retryAfter) {
        String redirect = status >= 300 && status < 400 ? ", a redirect, which is never followed" : "";
        String wait = retryAfter.map(time -> " and asked to wait " + time).orElse("");
        String detail = "the receiver answered " + status + redirect + wait;
        return new AttemptResult(Outcome.FAILED, OptionalInt.of(status), detail, retryAfter);
    }

    static AttemptResult unanswered(String detail) {
        return new AttemptResult(Outcome.FAILED, OptionalInt.empty(), detail, Optional.empty());
    }
}
