package io.tallyward.service.page;

import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.service.plan.AmendmentWords;
import io.tallyward.service.plan.PlanWords;

/** What the owner decided before the first event was counted. */
final class PlanSection {

    private PlanSection() {}

    static void write(Markup html, Standing standing) {
        Plan plan = standing.view().plan();
        TestPlan test = plan.test();
        html.open("section").leaf("h2", "Plan").open("dl", "class", "facts");
        OverviewPage.fact(html, "Test", test(test));
        OverviewPage.fact(html, "Benefit", direction(test.benefit().alpha(), PlanWords.spending(test.benefit())));
        OverviewPage.fact(
                html,
                "Harm",
                test.harm()
                        .map(harm -> direction(harm.alpha(), PlanWords.spending(harm)))
                        .orElse("not tested"));
        if (standing.challengers().size() > 1) {
            OverviewPage.fact(html, "Several variants", sharing(test.sharing()));
        }
        OverviewPage.fact(html, "Spending clock", PlanWords.clock(test));
        OverviewPage.fact(html, "Measure of information", PlanWords.measure(plan));
        OverviewPage.fact(
                html,
                "Futility",
                plan.futility()
                        .map(rule -> PlanWords.futility(rule) + "; advice only")
                        .orElse("none"));
        OverviewPage.fact(
                html,
                "Sized for",
                "a difference of " + Figures.points(test.signedEffect()) + " points from a rate of "
                        + Figures.percent(test.baseline()) + "; "
                        + (standing.higherIsBetter() ? "higher" : "lower") + " is better");
        course(html, plan);
        origin(html, standing);
        html.close().close();
    }

    /** What a mismatch is traced by, and which plan and record this is. */
    private static void origin(Markup html, Standing standing) {
        Plan plan = standing.view().plan();
        if (!plan.splitCheck().segments().isEmpty()) {
            OverviewPage.fact(
                    html,
                    "Segments",
                    "a mismatch is traced by "
                            + String.join(", ", plan.splitCheck().segments()));
        }
        OverviewPage.fact(html, "Plan digest", standing.view().planDigest());
        OverviewPage.fact(html, "Newest record", standing.view().lastRecord());
    }

    /** When it is looked at, how long it runs and how events are counted. */
    private static void course(Markup html, Plan plan) {
        OverviewPage.fact(html, "Looks", schedule(plan.looks()));
        OverviewPage.fact(html, "Run", run(plan));
        for (Amendment amendment : plan.amendments()) {
            OverviewPage.fact(html, "Amended", amended(amendment));
        }
        OverviewPage.fact(
                html,
                "Counting",
                "by " + PlanWords.code(plan.count().by()) + ", clicks within "
                        + Figures.span(plan.count().attribution()) + ", grace "
                        + Figures.span(plan.count().grace()) + ", windows of "
                        + Figures.span(plan.count().window()));
    }

    private static String test(TestPlan test) {
        return (test.sides() == TestPlan.Sides.TWO ? "two-sided" : "one-sided") + ", alpha "
                + PlanWords.shortest(test.alpha()) + ", power " + PlanWords.shortest(test.power());
    }

    private static String direction(double alpha, String spending) {
        return "alpha " + PlanWords.shortest(alpha) + ", spending " + spending;
    }

    private static String sharing(AlphaSharing sharing) {
        return switch (sharing) {
            case PASS_ON -> "share alpha evenly; one that is found passes its share on to the others";
            case SPLIT -> "share alpha evenly and for good";
        };
    }

    private static String run(Plan plan) {
        return Figures.minute(plan.run().from()) + " to "
                + Figures.minute(plan.end()) + " at most"
                + (plan.run().atLeast().isZero()
                        ? ""
                        : ", no benefit before " + Figures.span(plan.run().atLeast()));
    }

    private static String amended(Amendment amendment) {
        return "from " + Figures.minute(amendment.at()) + " on: " + AmendmentWords.of(amendment.change()) + " ("
                + amendment.reason() + ")";
    }

    private static String schedule(LookSchedule looks) {
        if (looks instanceof LookSchedule.Every every) {
            return "every " + Figures.span(every.interval()) + " of event time";
        }
        LookSchedule.AtFractions fractions = (LookSchedule.AtFractions) looks;
        return "at information "
                + String.join(
                        ", ",
                        fractions.fractions().stream()
                                .map(Figures::wholePercent)
                                .toList());
    }
}
