package io.tallyward.engine.plan;

import java.time.Duration;
import java.util.List;
import java.util.Objects;
import java.util.Optional;

/**
 * The plan of one experiment.
 *
 * @param experiment name; lower-case letters, digits and hyphens, at most 64 characters
 * @param question what the owner wants to know, in words
 * @param owner who decides; an address
 * @param count how events become trials and successes
 * @param variants all variants in the plan's order; exactly one is the control
 * @param test the hypothesis test of each variant against the control
 * @param looks when a look is due
 * @param futility when to give up for lack of promise, if at all
 * @param splitCheck the watch over the traffic split
 * @param trust limits beyond which the data are not trusted
 * @param run when the experiment runs
 * @param epochs planned changes of the split after the start, ascending by time; empty when the split never changes
 */
public record Plan(
        String experiment,
        String question,
        String owner,
        CountRule count,
        List<Variant> variants,
        TestPlan test,
        LookSchedule looks,
        Optional<FutilityPlan> futility,
        SplitCheckPlan splitCheck,
        TrustLimits trust,
        Run run,
        List<AllocationEpoch> epochs) {

    /** The counts keep a variant in four bits. */
    private static final int MOST_VARIANTS = 15;

    /** They keep a moment of the run in 35 bits of milliseconds, a little more than a year. */
    private static final Duration LONGEST_RUN = Duration.ofDays(397);

    public Plan {
        Objects.requireNonNull(experiment, "experiment");
        Objects.requireNonNull(question, "question");
        Objects.requireNonNull(owner, "owner");
        Objects.requireNonNull(count, "count");
        Objects.requireNonNull(test, "test");
        Objects.requireNonNull(looks, "looks");
        Objects.requireNonNull(futility, "futility");
        Objects.requireNonNull(splitCheck, "splitCheck");
        Objects.requireNonNull(trust, "trust");
        Objects.requireNonNull(run, "run");
        variants = List.copyOf(variants);
        epochs = List.copyOf(epochs);
        if (variants.stream().filter(Variant::control).count() != 1) {
            throw new IllegalArgumentException("variants: " + variants + " (expected: exactly one control)");
        }
        if (!(variants.size() <= MOST_VARIANTS)) {
            throw new IllegalArgumentException(
                    "variants: " + variants.size() + " (expected: at most " + MOST_VARIANTS + ")");
        }
        if (!(run.atMost().compareTo(LONGEST_RUN) <= 0)) {
            throw new IllegalArgumentException(
                    "run.atMost: " + run.atMost() + " (expected: at most " + LONGEST_RUN + ")");
        }
    }

    /** The variant the others are compared with. */
    public Variant control() {
        return variants.stream().filter(Variant::control).findFirst().orElseThrow();
    }

    /** The variants that are compared with the control, in the plan's order. */
    public List<Variant> challengers() {
        return variants.stream().filter(variant -> !variant.control()).toList();
    }

    /** Position of a variant in {@link #variants()}, or -1 when the plan has none of that name. */
    public int variantIndex(String name) {
        for (int i = 0; i < variants.size(); i++) {
            if (variants.get(i).name().equals(name)) {
                return i;
            }
        }
        return -1;
    }

    /** Index of the allocation epoch that holds at an event time: 0 before the first planned change, then 1, 2, ... */
    public int epochAt(long atMillis) {
        int epoch = 0;
        for (AllocationEpoch change : epochs) {
            if (atMillis < change.from().toEpochMilli()) {
                break;
            }
            epoch++;
        }
        return epoch;
    }

    /** Planned share of each variant, in the order of {@link #variants()}, during an allocation epoch. */
    public double[] sharesIn(int epoch) {
        if (epoch == 0) {
            return variants.stream().mapToDouble(Variant::share).toArray();
        }
        AllocationEpoch change = epochs.get(epoch - 1);
        return variants.stream()
                .mapToDouble(variant -> change.shares().get(variant.name()))
                .toArray();
    }
}
