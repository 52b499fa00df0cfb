package io.tallyward.service.page;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.decide.ExperimentView.LookPoint;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.page.Table.Column;
import io.tallyward.service.page.Wording.Words;
import java.time.Instant;
import java.util.List;
import java.util.Optional;

/** One experiment: what is known, what it means and what to do, then everything it rests on. */
final class ExperimentPage {

    private ExperimentPage() {}

    static String title(Standing standing, MonitorState monitor) {
        if (!monitor.atWork()) {
            return Wording.NOT_AT_WORK + " · " + standing.name();
        }
        if (monitor.unkeyed()) {
            return Wording.NOT_KEYED + " · " + standing.name();
        }
        ExperimentView view = standing.view();
        Words words = view.trust() == Trust.SOUND ? Wording.of(view.verdict()) : Wording.of(view.trust());
        return words.sign() + " " + standing.name() + ": " + words.label();
    }

    static void write(Markup html, Standing standing, Instant now) {
        ExperimentView view = standing.view();
        html.open("div", "class", "title").leaf("h1", standing.name());
        OverviewPage.badges(html, standing);
        html.close();
        html.leaf("p", view.plan().question(), "class", "question");
        html.leaf("p", "The decision is with " + view.plan().owner() + ".", "class", "owner");
        says(html, standing);
        html.open("dl", "class", "facts");
        OverviewPage.fact(html, "Run", OverviewPage.run(standing));
        OverviewPage.fact(html, "Complete until", OverviewPage.completeUntil(standing, now));
        OverviewPage.fact(html, "Looks", OverviewPage.looks(standing));
        html.close();
        comparisons(html, standing);
        RateSection.write(html, standing);
        SplitSection.write(html, standing);
        LookTable.write(html, standing);
        outcomes(html, view);
        PlanSection.write(html, standing);
    }

    /** Trust before verdict where it is broken: then it is what matters. */
    private static void says(Markup html, Standing standing) {
        ExperimentView view = standing.view();
        html.open("div", "class", "says");
        if (view.trust() == Trust.SOUND) {
            verdict(html, standing);
            trust(html, view);
        } else {
            trust(html, view);
            verdict(html, standing);
        }
        html.close();
    }

    private static void verdict(Markup html, Standing standing) {
        Verdict verdict = standing.view().verdict();
        List<String> ended = standing.ended();
        Words words = verdict.settled() || ended.isEmpty()
                ? Wording.of(verdict).with(action(standing, verdict))
                : Wording.partly(verdict, ended, standing.endedActions());
        if (standing.view().trust() != Trust.SOUND && !verdict.settled()) {
            words = Wording.untrusted(words, standing.heldInWords());
        }
        says(html, "verdict", verdict.code(), words, "");
    }

    /** Harm by one variant is not hidden behind what another variant has achieved. */
    private static String action(Standing standing, Verdict verdict) {
        String action = standing.action(verdict);
        return standing.worst() == verdict ? action : standing.action(standing.worst()) + " " + action;
    }

    private static void trust(Markup html, ExperimentView view) {
        says(html, "trust", view.trust().code(), Wording.of(view.trust()), Figures.prose(view.trustReason()));
    }

    private static void says(Markup html, String kind, String code, Words words, String reason) {
        html.open("section", "class", "card " + kind + "-" + code);
        html.leaf("h2", (kind.equals("trust") ? "Trust: " : "Verdict: ") + words.label());
        html.leaf("p", words.meaning());
        if (!reason.isEmpty()) {
            html.leaf("p", reason, "class", "reason");
        }
        html.open("p").leaf("b", "What to do: ").text(words.action()).close().close();
    }

    private static void comparisons(Markup html, Standing standing) {
        html.open("section")
                .leaf(
                        "h2",
                        "Variants against " + standing.view().plan().control().name());
        html.open("div", "class", "charts");
        for (Variant challenger : standing.challengers()) {
            html.open("figure");
            comparison(html, standing, challenger);
            html.close();
        }
        html.close();
        html.leaf(
                "p",
                "Solid lines are the boundaries at each look, dots are z at each look; the large dot is the latest. A"
                        + " dashed line is the futility boundary, which is advice. Boundaries far out are cut off at the"
                        + " rim.",
                "class",
                "note");
        html.close();
    }

    private static void comparison(Markup html, Standing standing, Variant challenger) {
        Verdict verdict = standing.verdictOn(challenger);
        html.open("figcaption").leaf("b", challenger.name()).text(" ");
        Frame.badge(html, "verdict", verdict.code(), Wording.of(verdict));
        html.close();
        Optional<Comparison> latest = standing.latest(challenger);
        if (latest.isEmpty()) {
            html.leaf("p", "No look yet. The path of z appears here with the first.");
            return;
        }
        Comparison look = latest.get();
        List<Comparison> path = standing.view().history().stream()
                .map(LookPoint::comparison)
                .filter(past -> past.variant().equals(challenger.name()))
                .toList();
        html.open("div", "class", "look");
        PathChart.draw(html, path.isEmpty() ? List.of(look) : path, standing.higherIsBetter());
        html.open("div");
        latest(html, standing, challenger, look);
        html.close().close();
    }

    private static void latest(Markup html, Standing standing, Variant challenger, Comparison look) {
        html.leaf("p", "At the latest look, number " + look.look() + ":", "class", "note");
        html.open("p", "class", "figures").text("z ").leaf("b", Figures.decimal(look.z()));
        html.text(", " + ZStrip.boundaries(look) + "; information " + Figures.wholePercent(look.informationFraction())
                + "; alpha spent " + Figures.probability(look.alphaSpent()));
        html.close();
        if (look.held() != null) {
            html.leaf(
                    "p", "Held until trust returns: " + Wording.of(look.held()).label() + ".", "class", "reason");
        }
        if (look.reason() != null && !look.reason().isEmpty()) {
            html.leaf("p", "Why: " + Figures.prose(look.reason()), "class", "figures");
        }
        EffectFacts.write(html, standing, challenger, look);
    }

    private static void outcomes(Markup html, ExperimentView view) {
        html.open("section").leaf("h2", "What became of the events");
        Table table = Table.open(
                html,
                "Outcomes of the events of complete windows",
                Column.text("Outcome"),
                Column.number("Events"),
                Column.number("Share"),
                Column.text("Is"));
        long total = view.outcomes().total();
        for (Outcome outcome : Outcome.values()) {
            long events = view.outcomes().get(outcome);
            table.row(outcome.code())
                    .number(Figures.count(events))
                    .number(total == 0 ? Figures.NONE : Figures.percent(events / (double) total))
                    .text(Wording.of(outcome))
                    .endRow();
        }
        table.close();
        html.close();
    }
}
