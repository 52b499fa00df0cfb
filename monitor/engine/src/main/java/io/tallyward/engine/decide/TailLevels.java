package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.statistics.multiplicity.AlphaGraph;
import java.util.Set;

/**
 * The levels at which one challenger is tested. The challengers share the family-wise level of each direction evenly; the
 * level of one that has been found passes to those that are not, direction by direction: whoever stops for benefit leaves
 * its benefit level to the others' benefit tests, whoever stops for harm its harm level to theirs. Two families of
 * one-sided hypotheses are so each kept at their own level, and with them the direction of every finding.
 *
 * <p>Bretz, Maurer, Brannath and Posch (2009); for looks over time Maurer and Bretz (2013), see {@link AlphaGraph}.
 *
 * @param benefit level of the direction of benefit, both over all looks
 * @param harm level of the direction of harm; 0 when harm is not tested
 */
public record TailLevels(double benefit, double harm) {

    /**
     * The levels of a challenger.
     *
     * @param challenger its position among the plan's challengers
     * @param benefits positions of the challengers whose benefit is found
     * @param harms positions of the challengers whose harm is found
     */
    public static TailLevels of(Plan plan, int challenger, Set<Integer> benefits, Set<Integer> harms) {
        return new TailLevels(
                level(plan, plan.test().benefit(), challenger, benefits),
                plan.test()
                        .harm()
                        .map(harm -> level(plan, harm, challenger, harms))
                        .orElse(0.0));
    }

    /** The levels before anything is found. */
    static TailLevels initial(Plan plan, int challenger) {
        return of(plan, challenger, Set.of(), Set.of());
    }

    private static double level(Plan plan, Tail tail, int challenger, Set<Integer> found) {
        int challengers = plan.variants().size() - 1;
        AlphaGraph graph = plan.test().sharing() == AlphaSharing.PASS_ON
                ? AlphaGraph.holm(challengers)
                : AlphaGraph.bonferroni(challengers);
        if (found.contains(challenger)) {
            return tail.alpha() / challengers;
        }
        return graph.levels(tail.alpha(), found).get(challenger);
    }

    double both() {
        return benefit + harm;
    }
}
