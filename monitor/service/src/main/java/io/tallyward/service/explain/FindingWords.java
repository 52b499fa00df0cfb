package io.tallyward.service.explain;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.plan.PlanWords;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;

/** What one look at one challenger says, in sentences. */
final class FindingWords {

    private final Plan plan;
    private final String variant;
    private final String control;
    private final Standing standing;
    private final Comparison look;
    private final VariantTotals own;
    private final VariantTotals others;

    /** @param standing of a challenger that was looked at */
    FindingWords(Plan plan, String variant, Standing standing) {
        this.plan = plan;
        this.variant = variant;
        this.standing = standing;
        control = plan.control().name();
        look = standing.look();
        own = VariantTotals.of(standing.at(), variant);
        others = VariantTotals.of(standing.at(), control);
    }

    private Verdict finding() {
        return standing.held() == null ? standing.verdict() : standing.held();
    }

    /** All of it. */
    List<String> sentences() {
        List<String> all = new ArrayList<>();
        all.add(seen());
        all.add(sure());
        all.add(boundary());
        all.add(spent());
        outlook().ifPresent(all::add);
        return all;
    }

    /** How many saw what, and what they did. */
    String seen() {
        String counted = PlanWords.countsViews(plan)
                ? "Of " + Numbers.count(others.trials()) + " views of " + control + " (by "
                        + Numbers.count(others.units())
                        + " units) " + Numbers.count(others.successes()) + " were clicked ("
                        + Numbers.percent(others.rate())
                        + "), of " + Numbers.count(own.trials()) + " views of " + variant + " (by "
                        + Numbers.count(own.units()) + " units) " + Numbers.count(own.successes()) + " ("
                        + Numbers.percent(own.rate()) + ")"
                : "Of " + Numbers.count(others.trials()) + " units that saw " + control + ", "
                        + Numbers.count(others.successes()) + " clicked (" + Numbers.percent(others.rate()) + "); of "
                        + Numbers.count(own.trials()) + " that saw " + variant + ", " + Numbers.count(own.successes())
                        + " ("
                        + Numbers.percent(own.rate()) + ")";
        String difference = plan.epochCount() > 1
                ? ". These rates do not compare like with like, because the planned split changed during the run; compared"
                        + " within each stretch of one split, the difference is "
                : ": a difference of ";
        return counted + difference + Numbers.points(look.difference()) + " percentage points" + lift() + ".";
    }

    private String lift() {
        if (look.lift() == null || Math.abs(look.lift().value()) < 0.0005) {
            return "";
        }
        double lift = look.lift().value();
        return ", or " + Numbers.shortPercent(Math.abs(Math.round(lift * 1000) / 1000.0))
                + (lift > 0 ? " more" : " fewer") + " clicks than with " + control;
    }

    /** How sure that is: at an end allowing for all looks, before it at all looks at once. */
    String sure() {
        Adjusted adjusted = look.adjusted();
        if (adjusted == null) {
            return look.differenceLower() == null && look.differenceUpper() == null
                    ? "How large the difference really is, nobody can say yet."
                    : "As things stand, the real difference may be anything "
                            + range(look.differenceLower(), look.differenceUpper()) + " (confidence "
                            + Numbers.shortPercent(1 - look.level()) + ", however often one looks).";
        }
        Estimated difference = adjusted.difference();
        String range = "Allowing for the looks that were taken, the real difference most likely lies "
                + range(difference.lower(), difference.upper()) + " (confidence "
                + Numbers.shortPercent(adjusted.level())
                + "; best estimate " + Numbers.points(difference.value()) + ").";
        return finding() == Verdict.STOP_BENEFIT || finding() == Verdict.STOP_HARM
                ? range + " If there were no difference at all, chance alone would look like this "
                        + Numbers.oneIn(adjusted.pValue()) + "."
                : range;
    }

    private static String range(Double lower, Double upper) {
        boolean below = lower == null || lower < -1;
        boolean above = upper == null || upper > 1;
        if (below && above) {
            return "at all";
        }
        if (below) {
            return "up to " + Numbers.points(upper) + " points";
        }
        return above
                ? "from " + Numbers.points(lower) + " points up"
                : "between " + Numbers.points(lower) + " and " + Numbers.points(upper) + " points";
    }

    /** The boundary, and how far it was. */
    String boundary() {
        boolean higher = plan.test().better() == Better.HIGHER;
        Double benefit = higher ? look.upper() : look.lower();
        Double harm = higher ? look.lower() : look.upper();
        Verdict finding = finding();
        String z = "The strength of the evidence, z, was " + Numbers.z(look.z());
        if (finding == Verdict.STOP_BENEFIT || finding == Verdict.STOP_HARM) {
            double crossed = finding == Verdict.STOP_BENEFIT ? benefit : harm;
            return z + "; at this look " + Numbers.z(crossed) + " was needed, so the boundary was passed by "
                    + Numbers.z(Math.abs(look.z() - crossed)) + ".";
        }
        List<String> needed = new ArrayList<>();
        needed.add(
                benefit == null
                        ? "a benefit could not be declared yet at this look"
                        : "a benefit needed " + Numbers.z(benefit) + " at this look ("
                                + Numbers.z(Math.abs(benefit - look.z())) + " away)");
        if (harm != null) {
            needed.add("harm " + Numbers.z(harm) + " (" + Numbers.z(Math.abs(look.z() - harm)) + " away)");
        }
        if (look.futility() != null && finding == Verdict.STOP_FUTILITY) {
            needed.add("and " + (higher ? "below " : "above ") + Numbers.z(look.futility()) + " the plan gives up");
        }
        return z + "; " + String.join(", ", needed) + ".";
    }

    /** How much of the permitted error is used up. */
    String spent() {
        return "The plan allows a false alarm about " + variant + " in " + Numbers.shortPercent(look.level())
                + " of such experiments, over all looks together; " + spentShare()
                + " of that allowance was used up by this look.";
    }

    private String spentShare() {
        double share = look.alphaSpent() / look.level();
        if (share > 0.9995) {
            return "all";
        }
        return share < 0.0005 ? "next to nothing" : Numbers.chance(share);
    }

    /** What is still to be expected, while the comparison goes on. */
    private Optional<String> outlook() {
        if (look.outlook() == null) {
            return Optional.empty();
        }
        return Optional.of(Numbers.chance(Math.min(1, look.informationFraction()))
                + " of the planned information is in. The chance that a benefit is still found by its end is "
                + Numbers.chance(look.outlook().underTrend()) + " if things go on as they are, and "
                + Numbers.chance(look.outlook().underDesign()) + " if the difference is really the "
                + Numbers.points(plan.test().signedEffect()) + " points that the plan looks for.");
    }
}
