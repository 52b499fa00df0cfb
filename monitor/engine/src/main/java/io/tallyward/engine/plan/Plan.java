package io.tallyward.engine.plan;

import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Objects;
import java.util.Optional;
import java.util.stream.Stream;

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
 * @param run when the experiment runs, as frozen; see {@link #end}
 * @param epochs planned changes of the split after the start, as frozen, ascending by time; empty when the split was not
 *     planned to change; see {@link #allocation}
 * @param amendments what has been amended since the plan was frozen, in the order of taking effect; not part of what is
 *     frozen
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
        List<AllocationEpoch> epochs,
        List<Amendment> amendments) {

    /** The counts keep a variant in four bits. */
    private static final int MOST_VARIANTS = 15;

    /** They keep a moment of the run in 35 bits of milliseconds, a little more than a year. */
    static final Duration LONGEST_RUN = Duration.ofDays(397);

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
        amendments = List.copyOf(amendments);
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

    /** A plan without amendments. */
    public Plan(
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
        this(
                experiment,
                question,
                owner,
                count,
                variants,
                test,
                looks,
                futility,
                splitCheck,
                trust,
                run,
                epochs,
                List.of());
    }

    /** The same frozen plan with other amendments. */
    public Plan amended(List<Amendment> now) {
        return new Plan(
                experiment,
                question,
                owner,
                count,
                variants,
                test,
                looks,
                futility,
                splitCheck,
                trust,
                run,
                epochs,
                now);
    }

    /** The first moment that is no longer part of the run, amendments considered. */
    public Instant end() {
        Instant end = run.end();
        for (Amendment amendment : amendments) {
            if (amendment.change() instanceof Amendment.End other) {
                end = other.end();
            } else if (amendment.change() instanceof Amendment.Stop) {
                end = amendment.at();
            }
        }
        return end;
    }

    /** The changes of the split after the start, planned or amended, ascending by time. */
    public List<AllocationEpoch> allocation() {
        List<AllocationEpoch> all = new ArrayList<>(epochs);
        for (Amendment amendment : amendments) {
            if (amendment.change() instanceof Amendment.Shares other) {
                all.add(new AllocationEpoch(amendment.at(), other.shares()));
            }
        }
        return List.copyOf(all);
    }

    /** How many allocation epochs there are, the first included. */
    public int epochCount() {
        return allocation().size() + 1;
    }

    /** The amendments in the order in which they take effect, without those that a stop overtakes. */
    public List<Amendment> amendmentsInForce() {
        if (!stopped()) {
            return amendments;
        }
        Amendment stop = amendments.get(amendments.size() - 1);
        return Stream.concat(
                        amendments.stream().filter(amendment -> amendment.at().isBefore(stop.at())), Stream.of(stop))
                .toList();
    }

    /** Whether the owner has ended the experiment, or will have when the last amendment takes effect. */
    public boolean stopped() {
        return !amendments.isEmpty() && amendments.get(amendments.size() - 1).change() instanceof Amendment.Stop;
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
        while (epoch < epochs.size() && atMillis >= epochs.get(epoch).from().toEpochMilli()) {
            epoch++;
        }
        for (Amendment amendment : amendments) {
            boolean begun = atMillis >= amendment.at().toEpochMilli();
            epoch += begun && amendment.change() instanceof Amendment.Shares ? 1 : 0;
        }
        return epoch;
    }

    /** Planned share of each variant, in the order of {@link #variants()}, during an allocation epoch. */
    public double[] sharesIn(int epoch) {
        if (epoch == 0) {
            return variants.stream().mapToDouble(Variant::share).toArray();
        }
        Map<String, Double> shares = allocation().get(epoch - 1).shares();
        return variants.stream()
                .mapToDouble(variant -> shares.get(variant.name()))
                .toArray();
    }
}
