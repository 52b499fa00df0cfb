package io.tallyward.service.rehearse;

import io.tallyward.engine.decide.DecisionMemo;
import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import java.util.ArrayDeque;
import java.util.LinkedHashMap;
import java.util.Map;
import java.util.concurrent.ExecutionException;
import java.util.concurrent.ExecutorService;
import java.util.concurrent.Executors;
import java.util.concurrent.Future;
import java.util.function.LongConsumer;

/**
 * Carries a plan out many times. Threads share the runs in blocks; the blocks are added up in the order of the runs, so
 * that the report is the same, to the bit, for any number of threads. Immutable; thread-safe.
 */
public final class Rehearsal {

    /** Small enough for progress to show and for threads to end together, large enough to be handed around. */
    private static final int RUNS_PER_BLOCK = 50;

    /** Blocks that may wait for each thread, so that a long rehearsal needs no more memory than a short one. */
    private static final int BLOCKS_AHEAD = 4;

    /** Looks whose bounds a thread remembers: plenty where information is planned, and a few megabytes where it is not. */
    private static final int LOOKS_REMEMBERED = 20_000;

    private final RehearsalRequest request;
    private final RehearsedPlan rehearsed;
    private final RunSimulation simulation;
    private final ThreadLocal<DecisionMemo> memo = ThreadLocal.withInitial(() -> new DecisionMemo(LOOKS_REMEMBERED));
    private final double[] trueDifferences;

    /**
     * Prepares a rehearsal: designs every challenger of the plan.
     *
     * @throws IllegalArgumentException if the plan cannot be designed or rehearsed, or the rates are not one per variant
     */
    public Rehearsal(Plan plan, RehearsalRequest request) {
        if (request.rates().length != plan.variants().size()) {
            throw new IllegalArgumentException("rates: " + request.rates().length + " of them (expected: "
                    + plan.variants().size() + ", one per variant)");
        }
        this.request = request;
        Map<String, PlanDesign> designs = new LinkedHashMap<>();
        for (Variant challenger : plan.challengers()) {
            designs.put(challenger.name(), PlanDesign.of(plan, challenger));
        }
        rehearsed = RehearsedPlan.of(plan, designs, request.perDay());
        simulation = new RunSimulation(rehearsed, request);
        trueDifferences = simulation.trueDifferences();
    }

    /**
     * Carries it out.
     *
     * @param progress is told, on the calling thread, how many more runs are done
     * @throws InterruptedException if the calling thread is interrupted; the work is given up
     */
    public RehearsalReport run(LongConsumer progress) throws InterruptedException {
        ExecutorService workers = Executors.newFixedThreadPool(request.threads());
        try {
            RunStatistics sum = new RunStatistics(trueDifferences.length);
            ArrayDeque<Future<RunStatistics>> ahead = new ArrayDeque<>();
            long next = 0;
            for (long done = 0; done < request.runs(); ) {
                while (next < request.runs() && ahead.size() < BLOCKS_AHEAD * request.threads()) {
                    long first = next;
                    next = Math.min(request.runs(), first + RUNS_PER_BLOCK);
                    long end = next;
                    ahead.add(workers.submit(() -> block(first, end)));
                }
                sum.add(result(ahead.remove()));
                long before = done;
                done = Math.min(request.runs(), done + RUNS_PER_BLOCK);
                progress.accept(done - before);
            }
            return sum.report(rehearsed, trueDifferences);
        } finally {
            workers.shutdownNow();
        }
    }

    private RunStatistics block(long first, long end) throws InterruptedException {
        RunStatistics statistics = new RunStatistics(trueDifferences.length);
        for (long index = first; index < end; index++) {
            if (Thread.interrupted()) {
                throw new InterruptedException("the rehearsal was given up");
            }
            statistics.add(simulation.run(index, memo.get()), trueDifferences);
        }
        return statistics;
    }

    private static RunStatistics result(Future<RunStatistics> block) throws InterruptedException {
        try {
            return block.get();
        } catch (ExecutionException e) {
            throw new IllegalStateException(
                    "a rehearsed run failed: " + e.getCause().getMessage(), e.getCause());
        }
    }
}
