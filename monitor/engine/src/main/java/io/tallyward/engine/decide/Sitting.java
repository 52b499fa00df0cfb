package io.tallyward.engine.decide;

/**
 * What a look finds on the table.
 *
 * @param found what the counts say
 * @param fraction information relative to the planned maximum
 * @param clock what the correlation of looks goes by, on about the same scale
 * @param windowEnd event time of the look, milliseconds since the epoch
 * @param time moment on the spending clock, in [0, 1]; 1 at the last look
 * @param benefitOpen whether the minimum run is over
 * @param last whether no look follows
 * @param again whether nothing has come in since the look before, by the clock: that look once more, as the last
 * @param caution why the level may be off, and that the look comes late, in words; empty when neither is so
 */
record Sitting(
        Evidence found,
        double fraction,
        double clock,
        long windowEnd,
        double time,
        boolean benefitOpen,
        boolean last,
        boolean again,
        String caution) {}
