package io.tallyward.service.rehearse;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.decide.DecisionMemo;
import io.tallyward.engine.decide.Detail;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.service.rehearse.Follower.Challenger;
import io.tallyward.statistics.distribution.Normal;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;
import java.util.random.RandomGenerator;
import java.util.random.RandomGeneratorFactory;

/**
 * Carries a plan out once, by chance: draws the counts of each step, hands them to the deciding rules as sealed windows and
 * follows the records until every verdict is told. A run depends on the seed and its index alone. Thread-safe.
 */
final class RunSimulation {

    private static final RandomGeneratorFactory<RandomGenerator> GENERATORS =
            RandomGeneratorFactory.of("L64X128MixRandom");

    /** Enough for a plan of a few looks to go in as a whole; a long one is not drawn to its end in vain. */
    private static final int MOST_AT_ONCE = 50;

    private final RehearsedPlan rehearsed;
    private final RehearsalRequest request;
    private final double[] rates;
    private final String planDigest;
    private final int stepsAtOnce;
    private final double[] trueDifferences;
    private final double naiveBenefit;
    private final double naiveHarm;

    RunSimulation(RehearsedPlan rehearsed, RehearsalRequest request) {
        this.rehearsed = rehearsed;
        this.request = request;
        rates = request.rates();
        Plan plan = rehearsed.plan();
        planDigest = PlanDigest.of(plan);
        stepsAtOnce = stepsAtOnce(rehearsed);
        naiveBenefit = Normal.upperQuantile(plan.test().benefit().alpha());
        naiveHarm = plan.test()
                .harm()
                .map(harm -> -Normal.upperQuantile(harm.alpha()))
                .orElse(Double.NEGATIVE_INFINITY);
        double control = rates[plan.variantIndex(plan.control().name())];
        trueDifferences = plan.challengers().stream()
                .mapToDouble(challenger -> rates[plan.variantIndex(challenger.name())] - control)
                .toArray();
    }

    /**
     * Making the records durable, which a rehearsal does without, is most of the work of a step, so that steps go in
     * together. What is decided does not depend on it, and what comes after the last verdict is not read. With several
     * challengers the traffic depends on the verdicts, which come with looks.
     */
    private static int stepsAtOnce(RehearsedPlan rehearsed) {
        if (rehearsed.plan().challengers().size() == 1) {
            return MOST_AT_ONCE;
        }
        return rehearsed.plan().looks() instanceof LookSchedule.Every every
                ? Math.toIntExact(every.interval().dividedBy(rehearsed.step()))
                : 1;
    }

    /** True rate of each challenger minus that of the control, in the plan's order. */
    double[] trueDifferences() {
        return trueDifferences.clone();
    }

    /**
     * One run.
     *
     * @param memo what earlier runs of the same thread have computed
     */
    RunResult run(long index, DecisionMemo memo) {
        Traffic traffic = traffic(index);
        DecideShard shard =
                new DecideShard(List.of(rehearsed.plan()), memo, request.estimates() ? Detail.FULL : Detail.BARE);
        Follower follower = new Follower(rehearsed.plan());
        for (int step = 0; step < rehearsed.steps() && !follower.over(); step += stepsAtOnce) {
            shard.apply(update(traffic, step, Math.min(rehearsed.steps(), step + stepsAtOnce)));
            shard.drainDecisions().forEach(follower::take);
            follower.challengers().stream()
                    .filter(Challenger::settled)
                    .forEach(challenger -> traffic.leaveOut(challenger.variant()));
        }
        int waited = shard.views().get(rehearsed.plan().experiment()).looksDelayed();
        return result(follower, waited);
    }

    /** The traffic of a run, from its beginning. */
    Traffic traffic(long index) {
        RandomGenerator random = GENERATORS.create(mixed(mixed(request.seed()) + index));
        return new Traffic(rehearsed, rates, request.fixedSplit(), random);
    }

    /** What the counting side would report of some steps, the last excluded. */
    TallyUpdate update(Traffic traffic, int from, int to) {
        List<WindowTally> windows = new ArrayList<>(to - from);
        for (int step = from; step < to; step++) {
            List<Cell> cells = traffic.step(step);
            OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder();
            for (Cell cell : cells) {
                outcomes.add(Outcome.TRIAL, cell.trials()).add(Outcome.SUCCESS, cell.successes());
            }
            windows.add(new WindowTally(rehearsed.startMillis(step), cells, outcomes.build()));
        }
        return new TallyUpdate(
                rehearsed.plan().experiment(),
                planDigest,
                0,
                1,
                rehearsed.startMillis(to),
                SealCause.WATERMARK,
                windows);
    }

    private RunResult result(Follower follower, int waited) {
        long millis = follower.endMillis() - rehearsed.startMillis(0);
        int steps = Math.toIntExact(millis / rehearsed.step().toMillis());
        List<RunResult.Arm> arms = new ArrayList<>(trueDifferences.length);
        for (int i = 0; i < trueDifferences.length; i++) {
            arms.add(arm(follower.challengers().get(i), trueDifferences[i]));
        }
        return new RunResult(
                follower.looks(), rehearsed.arrivalsBefore(steps), millis, follower.mismatch(), waited, arms);
    }

    /** A stop for futility crosses no boundary, so that there is no estimate adjusted for it. */
    private RunResult.Arm arm(Challenger challenger, double trueDifference) {
        List<Comparison> looks = challenger.looks();
        return new RunResult.Arm(
                challenger.ending(),
                looks.size(),
                looks.stream().anyMatch(this::naivelyRejects),
                looks.isEmpty() || challenger.ending() == Ending.FUTILITY
                        ? Optional.empty()
                        : StopEstimate.of(looks.get(looks.size() - 1), trueDifference));
    }

    /** The test somebody would do who knows of no other looks and no other challengers. */
    private boolean naivelyRejects(Comparison look) {
        double towardsBenefit = rehearsed.plan().test().better() == Better.HIGHER ? look.z() : -look.z();
        return towardsBenefit >= naiveBenefit || towardsBenefit <= naiveHarm;
    }

    /** A bijection after which neighbours have nothing in common: variant 13 of the finalisers of Stafford (2011), recalled. */
    private static long mixed(long value) {
        long z = (value ^ (value >>> 30)) * 0xbf58476d1ce4e5b9L;
        z = (z ^ (z >>> 27)) * 0x94d049bb133111ebL;
        return z ^ (z >>> 31);
    }
}
