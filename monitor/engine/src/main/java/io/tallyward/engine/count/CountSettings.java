package io.tallyward.engine.count;

import java.time.Duration;

/**
 * Settings of counting that belong to the stream rather than to a plan.
 *
 * @param maxSkew how far an event time may lie ahead of its record's timestamp
 * @param idleAfter how long, by the wall clock, a source may fail to advance before the clock stands in for it
 * @param unitKey key of the unit hash; the same on every instance and across restarts
 */
public record CountSettings(Duration maxSkew, Duration idleAfter, byte[] unitKey) {

    public CountSettings {
        if (maxSkew.isNegative()) {
            throw new IllegalArgumentException("maxSkew: " + maxSkew + " (expected: zero or more)");
        }
        if (idleAfter.isNegative() || idleAfter.isZero()) {
            throw new IllegalArgumentException("idleAfter: " + idleAfter + " (expected: more than zero)");
        }
        if (unitKey.length == 0) {
            throw new IllegalArgumentException("unitKey: empty (expected: at least one byte)");
        }
        unitKey = unitKey.clone();
    }

    @Override
    public byte[] unitKey() {
        return unitKey.clone();
    }

    @Override
    public String toString() {
        return "CountSettings[maxSkew=" + maxSkew + ", idleAfter=" + idleAfter + "]";
    }
}
