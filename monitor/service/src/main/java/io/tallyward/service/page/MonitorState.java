package io.tallyward.service.page;

import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import io.tallyward.service.status.StatusBoard.Counted;
import java.util.List;

/**
 * What every page says about the monitor itself and its input, whatever the experiments say.
 *
 * @param checks how the parts of this instance are
 * @param unkeyed whether a partition that this instance counts is known not to be keyed by unit
 * @param rejected records of the partitions that this instance counts that were not admitted, since their first event;
 *     0 or more
 */
public record MonitorState(List<Health> checks, boolean unkeyed, long rejected) {

    public MonitorState {
        checks = List.copyOf(checks);
        if (!(rejected >= 0)) {
            throw new IllegalArgumentException("rejected: " + rejected + " (expected: 0 or more)");
        }
    }

    /** The state that follows from what the parts say and from the latest report of each partition. */
    public static MonitorState of(List<Health> checks, Counted counts) {
        long rejected = counts.reports().values().stream()
                .flatMap(report -> report.rejected().values().stream())
                .mapToLong(Long::longValue)
                .sum();
        return new MonitorState(checks, counts.reports().values().stream().anyMatch(CountReport::unkeyed), rejected);
    }

    /** Whether every part works. */
    boolean atWork() {
        return checks.stream().allMatch(check -> check.state() == State.OK);
    }

    /** The parts that work and have something to say all the same. */
    List<Health> noted() {
        return checks.stream()
                .filter(check -> check.state() == State.OK && check.noted())
                .toList();
    }

    /** The parts that are on their way to work. */
    List<Health> starting() {
        return checks.stream().filter(check -> check.state() == State.STARTING).toList();
    }

    /** The parts that do not work, and are not merely on their way. */
    List<Health> failing() {
        return checks.stream()
                .filter(check -> check.state() == State.DOWN || check.state() == State.BROKEN)
                .toList();
    }
}
