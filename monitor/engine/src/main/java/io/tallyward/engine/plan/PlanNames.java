package io.tallyward.engine.plan;

import io.tallyward.engine.event.NameTable;
import java.util.Collection;
import java.util.List;

/** The experiments and variants of some plans by position, in the order of the plans. Immutable; may be shared. */
public final class PlanNames {

    private final NameTable experiments;
    private final List<NameTable> variants;

    /** @param plans at most one per experiment */
    public PlanNames(Collection<Plan> plans) {
        this(
                plans.stream().map(Plan::experiment).toList(),
                plans.stream()
                        .map(plan -> plan.variants().stream().map(Variant::name).toList())
                        .toList());
    }

    /**
     * Names without their plans.
     *
     * @param experiments names of the experiments, all different
     * @param variants for each experiment the names of its variants, all different
     */
    public PlanNames(List<String> experiments, List<List<String>> variants) {
        this.experiments = new NameTable(experiments);
        this.variants = variants.stream().map(NameTable::new).toList();
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
