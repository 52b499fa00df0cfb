package io.tallyward.engine.plan;

import java.time.Duration;

/**
 * Limits beyond which the data of an experiment are not trusted.
 *
 * @param crossoverShare largest tolerated share of crossover events among admitted events, in (0, 1]
 * @param lateShare largest tolerated share of late events among admitted events, in (0, 1]
 * @param starvedAfter how much event time without any trial of a variant counts as starvation
 */
public record TrustLimits(double crossoverShare, double lateShare, Duration starvedAfter) {

    /** Two per cent of either kind, and six hours of silence. */
    public static final TrustLimits DEFAULT = new TrustLimits(0.02, 0.02, Duration.ofHours(6));
}
