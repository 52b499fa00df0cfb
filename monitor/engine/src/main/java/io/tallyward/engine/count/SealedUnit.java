package io.tallyward.engine.count;

/**
 * A unit whose trial can no longer change.
 *
 * @param variant position of its variant in the plan
 * @param first event time of its first exposure
 * @param success whether a click came in time
 */
record SealedUnit(int variant, long first, boolean success) {}
