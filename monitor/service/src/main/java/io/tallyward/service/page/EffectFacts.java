package io.tallyward.service.page;

import io.tallyward.engine.decide.TailLevels;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.plan.PlanWords;
import java.util.Locale;
import java.util.Set;

/**
 * What a look says about the effect: while a comparison goes on, the difference so far and what may come of it; once it has
 * ended, the estimate adjusted for the looks taken, and the naive one named as such.
 */
final class EffectFacts {

    /** Levels that differ by less are the same level, computed another way. */
    private static final double ROUNDING = 1e-12;

    private EffectFacts() {}

    static void write(Markup html, Standing standing, Variant challenger, Comparison look) {
        html.open("dl", "class", "effect");
        if (look.adjusted() != null) {
            adjusted(html, look.adjusted(), look.held() != null);
        }
        OverviewPage.fact(html, naiveLabel(look), naive(look));
        level(html, standing, challenger, look);
        clustering(html, look);
        if (look.outlook() != null && standing.view().trust() == Trust.SOUND) {
            OverviewPage.fact(html, "Outlook", outlook(look));
        }
        html.close();
    }

    private static void adjusted(Markup html, Adjusted adjusted, boolean held) {
        html.open("div", "class", "adjusted");
        html.leaf("dt", "Effect, adjusted for the looks taken" + (held ? ", if the data could be trusted" : ""));
        html.open("dd").leaf("b", Figures.points(adjusted.difference().value()));
        html.text(" points, " + confidence(adjusted.level()) + " interval "
                + ends(
                        points(adjusted.difference().lower()),
                        points(adjusted.difference().upper())));
        if (adjusted.lift() != null) {
            html.text("; relative to the control " + relative(adjusted.lift()));
        }
        html.text("; p-value " + Figures.pValue(adjusted.pValue())).close().close();
    }

    private static String naiveLabel(Comparison look) {
        return ended(look) ? "Difference as observed, naive" : "Difference so far, naive";
    }

    private static String naive(Comparison look) {
        String text = Figures.points(look.difference()) + " points";
        if (look.lift() != null) {
            text += ", " + lift(look.lift().value()) + " of the control's rate";
        }
        return text + "; repeated interval " + LookTable.interval(look) + bias(look);
    }

    /** A stop for futility ends a comparison as well, but has no adjusted estimate. */
    private static boolean ended(Comparison look) {
        return look.adjusted() != null
                || look.verdict().settled()
                || (look.held() != null && look.held().settled());
    }

    private static String bias(Comparison look) {
        if (!ended(look)) {
            return "";
        }
        Verdict end = look.held() == null ? look.verdict() : look.held();
        return switch (end) {
            case STOP_BENEFIT, STOP_HARM -> ". Not adjusted: a stop picks a moment at which it looks large.";
            case STOP_FUTILITY -> ". Not adjusted: a stop picks a moment at which it looks small.";
            case WAITING, CONTINUE, EXHAUSTED, STOPPED -> ". Not adjusted for the looks taken.";
        };
    }

    private static void level(Markup html, Standing standing, Variant challenger, Comparison look) {
        double initial = initialLevel(standing, challenger);
        if (look.level() > initial + ROUNDING) {
            OverviewPage.fact(
                    html,
                    "Level in force",
                    PlanWords.shortest(look.level()) + ", raised from " + PlanWords.shortest(initial)
                            + ": another variant was found and has passed its share on");
        }
    }

    private static void clustering(Markup html, Comparison look) {
        if (look.clustering() != null) {
            OverviewPage.fact(
                    html,
                    "Design effect",
                    Figures.decimal(look.clustering().designEffect())
                            + ": variance between units over that of independent views. Taken for independent, z would be "
                            + Figures.decimal(look.clustering().independentZ()) + "; no decision rests on that.");
        }
    }

    private static double initialLevel(Standing standing, Variant challenger) {
        int position = standing.challengers().indexOf(challenger);
        TailLevels levels = TailLevels.of(standing.view().plan(), position, Set.of(), Set.of());
        return levels.benefit() + levels.harm();
    }

    private static String outlook(Comparison look) {
        Outlook outlook = look.outlook();
        return (ended(look) ? "If it were carried on: chance" : "Chance")
                + " to find a benefit at the planned end " + Figures.wholePercent(outlook.underTrend())
                + " if the effect seen so far goes on, " + Figures.wholePercent(outlook.underDesign())
                + " if it is the smallest worth finding, " + Figures.wholePercent(outlook.withoutEffect())
                + " if there is none; " + Figures.wholePercent(outlook.predictive())
                + " averaged over what the data say. A description, not a decision.";
    }

    private static String relative(Estimated lift) {
        return lift(lift.value()) + ", " + ends(end(lift.lower()), end(lift.upper()));
    }

    private static String confidence(double level) {
        return String.format(Locale.ROOT, "%.4g", level * 100).replaceAll("\\.?0+$", "") + "\u00a0%";
    }

    /** An end of an interval of the difference; null stays null. */
    static String points(Double endOrNull) {
        return endOrNull == null ? null : Figures.points(endOrNull);
    }

    private static String end(Double endOrNull) {
        return endOrNull == null ? null : lift(endOrNull);
    }

    private static String lift(double value) {
        return Figures.points(value) + "\u00a0%";
    }

    /** An interval with ends in words; null for an open end. */
    static String ends(String lower, String upper) {
        if (lower == null) {
            return upper == null ? Figures.NONE : upper + " or less";
        }
        return upper == null ? lower + " or more" : lower + " to " + upper;
    }
}
