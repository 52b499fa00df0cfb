package io.tallyward.engine.plan;

import io.tallyward.engine.event.NameTable;
import java.util.Collection;
import java.util.List;
import java.util.TreeSet;

/**
 * The experiments and variants of some plans by position, in the order of the plans, and the segment fields that any of them
 * names. Immutable; may be shared.
 */
public final class PlanNames {

    private final NameTable experiments;
    private final List<NameTable> variants;
    private final NameTable segments;

    /** @param plans at most one per experiment */
    public PlanNames(Collection<Plan> plans) {
        this(
                plans.stream().map(Plan::experiment).toList(),
                plans.stream()
                        .map(plan -> plan.variants().stream().map(Variant::name).toList())
                        .toList(),
                new TreeSet<>(plans.stream()
                        .flatMap(plan -> plan.splitCheck().segments().stream())
                        .toList()));
    }

    /**
     * The names of plans with the segment fields in an order of their own.
     *
     * @param plans at most one per experiment
     * @param segments all that any of the plans names, and perhaps more
     */
    public static PlanNames of(List<Plan> plans, List<String> segments) {
        return new PlanNames(
                plans.stream().map(Plan::experiment).toList(),
                plans.stream()
                        .map(plan -> plan.variants().stream().map(Variant::name).toList())
                        .toList(),
                segments);
    }

    /**
     * Names without their plans.
     *
     * @param experiments names of the experiments, all different
     * @param variants for each experiment the names of its variants, all different
     * @param segments names of the segment fields that any plan names, all different
     */
    public PlanNames(List<String> experiments, List<List<String>> variants, Collection<String> segments) {
        this.experiments = new NameTable(experiments);
        this.variants = variants.stream().map(NameTable::new).toList();
        this.segments = new NameTable(segments);
    }

    /** Names without their plans, none of which names a segment. */
    public PlanNames(List<String> experiments, List<List<String>> variants) {
        this(experiments, variants, List.of());
    }

    /** The segment fields that any plan names, by position. */
    public NameTable segments() {
        return segments;
    }

    /** Position of an experiment, or -1 when no plan names it. */
    public int experiment(char[] text, int from, int length) {
        return experiments.find(text, from, length);
    }

    /** Position of an experiment, or -1 when no plan names it. */
    public int experiment(String name) {
        return experiments.find(name);
    }

    /** Position of a variant in the plan of an experiment that has a position, or -1 when the plan has none of that name. */
    public int variant(int experiment, char[] text, int from, int length) {
        return variants.get(experiment).find(text, from, length);
    }

    /** Position of a variant in the plan of an experiment that has a position, or -1 when the plan has none of that name. */
    public int variant(int experiment, String name) {
        return variants.get(experiment).find(name);
    }
}
