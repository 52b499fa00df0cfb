package io.tallyward.demo.bench;

import io.tallyward.connector.kafka.ShardRunner;
import io.tallyward.demo.bench.CaseMain.Task;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.book.PlanSource;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanDirectory;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.StatusBoard;
import io.tallyward.service.watch.CountGroup;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.InstantSource;
import java.util.List;
import java.util.Map;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.atomic.AtomicReference;

/** The counting side of the service, wired as the service wires it, from the first record to the last commit. */
final class CountCase {

    private static final long LOOK_MILLIS = 10;

    /** The events are months old: without a long idle time the clock would stand in for event time. */
    private static final String CONFIGURATION = """
            name: bench-%s
            kafka: {bootstrap-servers: "%s"}
            input: {topics: [%s], start: earliest, idle-after: PT24H}
            plans: %s
            commit-interval: PT1S
            workers: 1
            """;

    private CountCase() {}

    static Measurement measure(Task task, CountBy by) throws IOException, InterruptedException, BadInputException {
        Path file = task.directory().resolve("bench-" + task.run() + ".yaml");
        Files.writeString(
                file, CONFIGURATION.formatted(task.run(), task.bootstrapServers(), task.topic(), task.plans()));
        ServiceConfig config = new ConfigReader(Map.of()).read(file).orElseThrow();
        List<Plan> plans = PlanDirectory.read(config.plans()).orElseThrow().stream()
                .map(plan -> countedBy(by, plan))
                .toList();
        StatusBoard board = new StatusBoard();
        AtomicReference<Throwable> broken = new AtomicReference<>();
        Stopwatch stopwatch = new Stopwatch(task.warmUp());
        try (ShardRunner runner = ShardRunner.start(
                CountGroup.of(config, PlanSource.fixed(plans), board),
                InstantSource.system(),
                (name, cause) -> broken.set(cause))) {
            while (runner.status().recordsConsumed() < task.events() || counted(board) < task.events()) {
                if (broken.get() != null) {
                    throw new IllegalStateException("counting has stopped", broken.get());
                }
                TimeUnit.MILLISECONDS.sleep(LOOK_MILLIS);
                stopwatch.passed(runner.status().recordsConsumed());
            }
            Measurement measurement = stopwatch.stop(runner.status().recordsConsumed());
            requireExact(task, board, runner.status().recordsConsumed());
            return measurement;
        }
    }

    private static Plan countedBy(CountBy by, Plan plan) {
        CountRule rule = plan.count();
        return new Plan(
                plan.experiment(),
                plan.question(),
                plan.owner(),
                new CountRule(by, rule.attribution(), rule.grace(), rule.window()),
                plan.variants(),
                plan.test(),
                plan.looks(),
                plan.futility(),
                plan.splitCheck(),
                plan.trust(),
                plan.run(),
                plan.epochs());
    }

    /** Events that a committed report accounts for. */
    private static long counted(StatusBoard board) {
        return board.counts().reports().values().stream()
                .mapToLong(CountCase::events)
                .sum();
    }

    private static long events(CountReport report) {
        long events =
                report.rejected().values().stream().mapToLong(Long::longValue).sum();
        for (CountReport.ExperimentCount count : report.experiments().values()) {
            events += count.outcomes().total() + count.open();
        }
        return events;
    }

    private static void requireExact(Task task, StatusBoard board, long consumed) {
        long late = 0;
        long rejected = 0;
        for (CountReport report : board.counts().reports().values()) {
            rejected += report.rejected().values().stream()
                    .mapToLong(Long::longValue)
                    .sum();
            for (CountReport.ExperimentCount count : report.experiments().values()) {
                late += count.outcomes().get(Outcome.LATE);
            }
        }
        long counted = counted(board);
        if (counted != task.events() || consumed != task.events() || late != 0 || rejected != 0) {
            throw new IllegalStateException(
                    "counted " + counted + " of " + task.events() + " events in " + consumed + " records, " + late
                            + " late, " + rejected + " rejected (expected: all, none late, none rejected)");
        }
    }
}
