package io.tallyward.demo.truth;

/**
 * A place in the counts of one experiment.
 *
 * @param partition partition of the topic
 * @param windowStartMillis start of the window
 * @param epoch index of the allocation epoch
 * @param variant position of the variant in the plan
 */
public record Cell(int partition, long windowStartMillis, int epoch, int variant) {}
