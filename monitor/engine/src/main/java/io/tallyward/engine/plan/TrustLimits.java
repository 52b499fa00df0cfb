package io.tallyward.engine.plan;

import java.time.Duration;

/**
 * Limits beyond which the data of an experiment are not trusted.
 *
 * @param crossoverShare largest tolerated share of crossover events among admitted events, in (0, 1]
 * @param lateShare largest tolerated share of late events among admitted events, in (0, 1]
 * @param orphanGap largest tolerated difference between the share of orphans among the clicks of a variant and among those of
 *     the others, in (0, 1]
 * @param starvedAfter how much event time without any trial of a variant counts as starvation
 */
public record TrustLimits(double crossoverShare, double lateShare, double orphanGap, Duration starvedAfter) {

    /** A gap of five per cent. */
    public static final double DEFAULT_ORPHAN_GAP = 0.05;

    /** Two per cent of crossovers and of late events, a gap of five per cent, and six hours of silence. */
    public static final TrustLimits DEFAULT = new TrustLimits(0.02, 0.02, DEFAULT_ORPHAN_GAP, Duration.ofHours(6));
}
