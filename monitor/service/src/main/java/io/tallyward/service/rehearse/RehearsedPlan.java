package io.tallyward.service.rehearse;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.Variant;
import java.math.BigInteger;
import java.time.Duration;
import java.util.Map;
import java.util.OptionalLong;

/**
 * A plan made ready for rehearsal. Decisions look at the ends of windows only, so windows between which nothing is planned
 * to happen are merged into steps: as wide as divides a day, the run and its minimum, the interval of looks and the starts
 * of epochs. Where looks wait for information instead of time, a step is short enough for {@value #LEAST_STEPS} of them.
 *
 * <p>What merging changes: the split check, the silence of variants and a look that has to wait for more data are
 * considered at the ends of steps only.
 *
 * @param plan the plan with the step as its window
 * @param original the plan as it was written
 * @param steps number of steps of the run
 * @param arrivals units that arrive in the whole run, all variants together
 */
record RehearsedPlan(Plan plan, Plan original, int steps, long arrivals) {

    private static final int LEAST_STEPS = 200;

    /** More steps than this would take a second for a single run. */
    private static final long MOST_STEPS = 1_000_000;

    /** Cumulative counts up to here are doubles. */
    private static final long MOST_ARRIVALS = 1L << 50;

    /**
     * Makes a plan ready.
     *
     * @param designs the design of every challenger, by name
     * @param perDay units exposed per day, all variants; without it as many as reach the planned trials at the end of the
     *     run
     * @throws IllegalArgumentException if the run would have too many steps or arrivals
     */
    static RehearsedPlan of(Plan plan, Map<String, PlanDesign> designs, OptionalLong perDay) {
        long length = plan.run().atMost().toMillis();
        long window = plan.count().window().toMillis();
        long atLeast = roundedUp(plan.run().atLeast().toMillis(), window);
        long step = stepMillis(plan, window, atLeast);
        long steps = length / step;
        if (steps > MOST_STEPS) {
            throw new IllegalArgumentException("count.window: the run falls into " + steps
                    + " stretches to be considered one by one (expected: at most " + MOST_STEPS + ")");
        }
        double arrivals = perDay.isPresent()
                ? perDay.getAsLong() * (length / (double) Duration.ofDays(1).toMillis())
                : plannedArrivals(plan, designs);
        if (!(arrivals >= 1 && arrivals <= MOST_ARRIVALS)) {
            throw new IllegalArgumentException("units exposed in the run: " + arrivals + " (expected: from 1 to 2^50)");
        }
        return new RehearsedPlan(withStep(plan, step, atLeast), plan, (int) steps, (long) StrictMath.rint(arrivals));
    }

    private static long stepMillis(Plan plan, long window, long atLeast) {
        long from = plan.run().from().toEpochMilli();
        long common = gcd(Duration.ofDays(1).toMillis(), plan.run().atMost().toMillis());
        common = gcd(common, atLeast);
        for (AllocationEpoch epoch : plan.epochs()) {
            common = gcd(common, epoch.from().toEpochMilli() - from);
        }
        if (plan.looks() instanceof LookSchedule.Every every) {
            return gcd(common, every.interval().toMillis());
        }
        return shortEnough(common, window, plan.run().atMost().toMillis());
    }

    /** The widest step of whole windows that divides {@code common} and leaves enough of them; one window if none does. */
    private static long shortEnough(long common, long window, long length) {
        long windows = common / window;
        for (long parts = 1; parts <= windows; parts++) {
            if (windows % parts == 0 && length / (common / parts) >= LEAST_STEPS) {
                return common / parts;
            }
        }
        return window;
    }

    /** A minimum that ends within a window is over at that window's end. */
    private static long roundedUp(long millis, long window) {
        return (millis + window - 1) / window * window;
    }

    private static long gcd(long a, long b) {
        return BigInteger.valueOf(a).gcd(BigInteger.valueOf(b)).longValueExact();
    }

    private static double plannedArrivals(Plan plan, Map<String, PlanDesign> designs) {
        double[] shares = plan.sharesIn(plan.epochs().size());
        double most = 0;
        for (Variant challenger : plan.challengers()) {
            for (Map.Entry<String, Long> trials :
                    designs.get(challenger.name()).trials().entrySet()) {
                most = Math.max(most, trials.getValue() / shares[plan.variantIndex(trials.getKey())]);
            }
        }
        return StrictMath.ceil(most);
    }

    private static Plan withStep(Plan plan, long step, long atLeast) {
        CountRule count = plan.count();
        Run run = plan.run();
        return new Plan(
                plan.experiment(),
                plan.question(),
                plan.owner(),
                new CountRule(count.by(), count.attribution(), count.grace(), Duration.ofMillis(step)),
                plan.variants(),
                plan.test(),
                plan.looks(),
                plan.futility(),
                plan.splitCheck(),
                plan.trust(),
                new Run(run.from(), Duration.ofMillis(atLeast), run.atMost()),
                plan.epochs());
    }

    /** Length of a step. */
    Duration step() {
        return plan.count().window();
    }

    /** Start of a step, from 0 for the first; of the one after the last, the end of the run. */
    long startMillis(int step) {
        return plan.run().from().toEpochMilli() + step * step().toMillis();
    }

    /** Units that arrive before a step starts, all variants: evenly spread over the run, rounded down. */
    long arrivalsBefore(int step) {
        long whole = arrivals / steps;
        long rest = arrivals % steps;
        return whole * step + rest * step / steps;
    }
}
