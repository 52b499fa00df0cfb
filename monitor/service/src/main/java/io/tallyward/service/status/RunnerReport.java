package io.tallyward.service.status;

import java.util.Objects;
import java.util.OptionalDouble;

/**
 * What the hosts of one group of shards have done since the process started.
 *
 * @param group which shards, as in {@code count} or {@code decide}
 * @param commits committed transactions
 * @param aborts aborted transactions
 * @param restoreSeconds how long the latest restore took; empty before the first has ended
 */
public record RunnerReport(String group, long commits, long aborts, OptionalDouble restoreSeconds) {

    public RunnerReport {
        Objects.requireNonNull(group, "group");
        Objects.requireNonNull(restoreSeconds, "restoreSeconds");
    }
}
