package io.tallyward.engine.plan;

import java.time.Instant;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.stream.Collectors;

/**
 * Which plan stands for each experiment, given everything that was ever proposed, in order. All instances read the same
 * entries in the same order and so agree, whatever plan files they have:
 *
 * <ul>
 *   <li>until the first event of an experiment is about to be counted, the latest proposal stands;
 *   <li>then the plan is frozen: from there on a proposal may only add {@linkplain Amendment amendments}, each of which takes
 *       effect later than anything that can have been counted when it was proposed;
 *   <li>whatever else is proposed is refused, and the frozen plan stands.
 * </ul>
 *
 * <p>A pure state machine; not thread-safe.
 */
public final class PlanBook {

    /** Refusals that are remembered of one experiment; the oldest are forgotten. */
    private static final int MOST_REFUSALS = 100;

    private static final int MOST_NAMED = 5;

    /** Experiments in all; every instance keeps a little of each. */
    static final int MOST_EXPERIMENTS = 10_000;

    private final Map<String, Entry> entries = new LinkedHashMap<>();
    private final Map<String, List<Refusal>> refusals = new LinkedHashMap<>();
    private final Map<String, Long> refused = new LinkedHashMap<>();

    /**
     * What stands for one experiment.
     *
     * @param plan the plan with the amendments so far
     * @param frozen whether events are counted under it, or about to be
     */
    public record Entry(Plan plan, boolean frozen) {}

    /**
     * A proposal that was refused.
     *
     * @param number 1 for the first refusal of the experiment, then 2, 3, ...
     * @param proposed the plan that was proposed
     * @param reason why, in words
     */
    public record Refusal(long number, Plan proposed, String reason) {}

    /** What became of a proposal. */
    public sealed interface Ruling permits Ruling.Unchanged, Ruling.Adopted, Ruling.Amended, Ruling.Refused {

        /** It is the plan that stands. */
        record Unchanged() implements Ruling {}

        /** It stands now, the first of its experiment or in the place of one under which nothing was counted. */
        record Adopted() implements Ruling {}

        /** @param added the amendments that are new */
        record Amended(List<Amendment> added) implements Ruling {}

        /** @param reason why, in words */
        record Refused(String reason) implements Ruling {}
    }

    /**
     * What would become of a proposal.
     *
     * @param notBefore event time before which nothing may be amended: later than any event that can have been admitted when
     *     the proposal is made
     */
    public Ruling rule(Plan proposed, Instant notBefore) {
        Entry entry = entries.get(proposed.experiment());
        Optional<AmendmentRules.Problem> problem = AmendmentRules.problem(proposed);
        if (problem.isPresent()) {
            return new Ruling.Refused(problem.get().toString());
        }
        if (entry != null && entry.plan().equals(proposed)) {
            return new Ruling.Unchanged();
        }
        if (entry == null && entries.size() >= MOST_EXPERIMENTS) {
            return new Ruling.Refused("there are plans of " + MOST_EXPERIMENTS
                    + " experiments already (expected: fewer; a service of another name takes more)");
        }
        if (entry == null || !entry.frozen()) {
            return new Ruling.Adopted();
        }
        return ruleOnFrozen(entry.plan(), proposed, notBefore);
    }

    private static Ruling ruleOnFrozen(Plan frozen, Plan proposed, Instant notBefore) {
        List<PlanTerms.Difference> differences = PlanTerms.differences(frozen, proposed);
        if (!differences.isEmpty()) {
            return new Ruling.Refused(named(differences));
        }
        if (!PlanDigest.of(frozen).equals(PlanDigest.of(proposed))) {
            return new Ruling.Refused("it differs from the frozen plan in its digest");
        }
        List<Amendment> before = frozen.amendments();
        List<Amendment> now = proposed.amendments();
        if (now.size() < before.size() || !now.subList(0, before.size()).equals(before)) {
            return new Ruling.Refused("amendments that were made before are missing or changed (expected: the "
                    + before.size() + " made so far, as they are, and new ones behind them)");
        }
        for (Amendment added : now.subList(before.size(), now.size())) {
            if (added.at().isBefore(notBefore)) {
                return new Ruling.Refused("amendment " + (now.indexOf(added) + 1) + ": at " + added.at()
                        + ", where events may be counted already (expected: " + windowFrom(frozen, notBefore)
                        + " or later)");
            }
        }
        return new Ruling.Amended(now.subList(before.size(), now.size()));
    }

    /** The first start of a window that is not before a moment. */
    private static Instant windowFrom(Plan plan, Instant moment) {
        long window = plan.count().window().toMillis();
        return Instant.ofEpochMilli(Math.floorDiv(moment.toEpochMilli() + window, window) * window);
    }

    private static String named(List<PlanTerms.Difference> differences) {
        String named = differences.stream()
                .limit(MOST_NAMED)
                .map(PlanTerms.Difference::toString)
                .collect(Collectors.joining("; "));
        int more = differences.size() - MOST_NAMED;
        return named + (more > 0 ? "; and " + more + " more" : "");
    }

    /** Takes a proposal; see {@link #rule}. */
    public Ruling propose(Plan proposed, Instant notBefore) {
        Ruling ruling = rule(proposed, notBefore);
        String experiment = proposed.experiment();
        if (ruling instanceof Ruling.Refused refusal) {
            long number = refused.merge(experiment, 1L, Long::sum);
            List<Refusal> list = refusals.computeIfAbsent(experiment, name -> new ArrayList<>());
            list.add(new Refusal(number, proposed, refusal.reason()));
            if (list.size() > MOST_REFUSALS) {
                list.remove(0);
            }
        } else if (!(ruling instanceof Ruling.Unchanged)) {
            boolean frozen = ruling instanceof Ruling.Amended;
            entries.put(experiment, new Entry(proposed, frozen));
        }
        return ruling;
    }

    /** Takes an entry; returns what became of it if it was a proposal. */
    public Optional<Ruling> take(PlanEntry entry) {
        if (entry instanceof PlanEntry.Proposal proposal) {
            return Optional.of(propose(proposal.plan(), proposal.notBefore()));
        }
        freeze(entry.experiment());
        return Optional.empty();
    }

    /** Freezes the plan that stands for an experiment; without one, or where it is frozen already, nothing happens. */
    public void freeze(String experiment) {
        entries.computeIfPresent(experiment, (name, entry) -> new Entry(entry.plan(), true));
    }

    /** What stands, by experiment, in the order of the first proposals. */
    public Map<String, Entry> entries() {
        return new LinkedHashMap<>(entries);
    }

    /** The latest refusals, by experiment. */
    public Map<String, List<Refusal>> refusals() {
        Map<String, List<Refusal>> copy = new LinkedHashMap<>();
        refusals.forEach((experiment, list) -> copy.put(experiment, List.copyOf(list)));
        return copy;
    }

    /** What stands for an experiment; empty where nothing was proposed. */
    public Optional<Entry> entry(String experiment) {
        return Optional.ofNullable(entries.get(experiment));
    }

    /** The last refusal of this very proposal, as far as is remembered. */
    public Optional<Refusal> refusal(Plan proposed) {
        return refusals.getOrDefault(proposed.experiment(), List.of()).stream()
                .filter(refusal -> refusal.proposed().equals(proposed))
                .reduce((earlier, later) -> later);
    }
}
