package io.tallyward.engine.record;

import java.time.Instant;

/**
 * What has fallen silent.
 *
 * @param variant name of the variant without trials; empty when there are none of any
 * @param since end of the last window that had any, or the start of the run
 * @param due how many trials of the variant were due since then by what the others had, rounded; 0 when there are none of any
 */
public record Silence(String variant, Instant since, long due) {}
