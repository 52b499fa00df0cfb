package io.tallyward.engine.plan;

import java.time.Instant;
import java.util.Map;
import java.util.Objects;

/**
 * A change of a frozen plan that does not touch what the test has promised. It holds from a moment of event time on, which has
 * to lie ahead of everything counted when it is made, so that counts and decisions are the same whoever learns of it when.
 *
 * @param at when it takes effect, in event time; aligned to a window
 * @param reason why, in words
 * @param change what changes
 */
public record Amendment(Instant at, String reason, Change change) {

    public Amendment {
        Objects.requireNonNull(at, "at");
        Objects.requireNonNull(reason, "reason");
        Objects.requireNonNull(change, "change");
    }

    /** What may change. */
    public sealed interface Change permits End, Shares, Stop {}

    /**
     * Another end of the run, earlier or later than the one before.
     *
     * @param end the first moment that is no longer part of the run; after the moment the amendment takes effect
     */
    public record End(Instant end) implements Change {
        public End {
            Objects.requireNonNull(end, "end");
        }
    }

    /**
     * Another split: an allocation epoch begins when the amendment takes effect.
     *
     * @param shares planned share of every variant from then on; they add up to 1
     */
    public record Shares(Map<String, Double> shares) implements Change {
        public Shares {
            shares = Map.copyOf(shares);
        }
    }

    /** The owner ends the experiment: the run ends when the amendment takes effect. */
    public record Stop() implements Change {}
}
