package io.tallyward.service.watch;

import io.tallyward.connector.kafka.RunnerStatus;
import io.tallyward.connector.kafka.WorkerState;
import io.tallyward.connector.kafka.WorkerStatus;
import io.tallyward.service.status.HealthSource;
import io.tallyward.service.status.RunnerReport;
import java.util.List;
import java.util.OptionalDouble;
import java.util.function.Supplier;

/** How a group of shards is, from the status of its workers: as well as the worst of them. */
final class RunnerHealth implements HealthSource {

    private final String name;
    private final Supplier<RunnerStatus> status;

    RunnerHealth(String name, Supplier<RunnerStatus> status) {
        this.name = name;
        this.status = status;
    }

    @Override
    public Health health() {
        RunnerStatus now = status.get();
        List<WorkerState> states =
                now.workers().stream().map(WorkerStatus::state).toList();
        if (states.contains(WorkerState.FAILED)) {
            return new Health(name, State.BROKEN, lastError(now, "A worker has failed; its log says why."));
        }
        if (states.contains(WorkerState.BROKER_UNREACHABLE)) {
            return new Health(name, State.DOWN, lastError(now, "The broker does not answer; trying again."));
        }
        if (states.contains(WorkerState.STOPPED)) {
            return new Health(name, State.DOWN, "Stopped.");
        }
        if (states.contains(WorkerState.RESTORING)) {
            return new Health(name, State.STARTING, restoring(now));
        }
        if (states.contains(WorkerState.STARTING)) {
            return new Health(name, State.STARTING, "Joining the group " + now.group() + ".");
        }
        return new Health(
                name,
                State.OK,
                now.partitions().isEmpty()
                        ? "Standing by: the group's partitions are all with other members."
                        : "Hosting partitions " + now.partitions() + ".");
    }

    /** As in "Restoring state: 2 partitions of tallyward-count left, 40 % of 1000 records read where reading has begun." */
    private static String restoring(RunnerStatus now) {
        int waiting = 0;
        long remaining = 0;
        long total = 0;
        for (WorkerStatus worker : now.workers()) {
            waiting += worker.restoring().waiting().size();
            remaining += worker.restoring().remaining();
            total += worker.restoring().total();
        }
        if (waiting == 0) {
            return "Restoring the state of " + now.group() + ".";
        }
        String partitions = waiting == 1 ? "1 partition" : waiting + " partitions";
        String read = total == 0
                ? ""
                : ", " + 100 * (total - remaining) / total + " % of " + total + " records read where reading has begun";
        return "Restoring state: " + partitions + " of " + now.group() + " left" + read + ".";
    }

    private static String lastError(RunnerStatus status, String otherwise) {
        return status.workers().stream()
                .filter(worker -> !worker.state().healthy())
                .flatMap(worker -> worker.lastError().stream())
                .findFirst()
                .orElse(otherwise);
    }

    /** The same status as figures. */
    static RunnerReport report(String group, RunnerStatus status) {
        long commits = 0;
        long aborts = 0;
        long restoreMillis = 0;
        int waiting = 0;
        long remaining = 0;
        boolean reached = true;
        for (WorkerStatus worker : status.workers()) {
            commits += worker.commits();
            aborts += worker.aborts();
            restoreMillis = Math.max(restoreMillis, worker.restoreMillis());
            waiting += worker.restoring().waiting().size();
            remaining += worker.restoring().remaining();
            reached &= worker.state() != WorkerState.BROKER_UNREACHABLE;
        }
        return new RunnerReport(
                group,
                commits,
                aborts,
                restoreMillis == 0 ? OptionalDouble.empty() : OptionalDouble.of(restoreMillis / 1000.0),
                waiting,
                remaining,
                reached);
    }
}
