package io.tallyward.service.page;

import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Trust;
import io.tallyward.service.page.Standing.Urgency;
import java.time.Duration;
import java.time.Instant;
import java.util.Comparator;
import java.util.List;
import java.util.Locale;
import java.util.Optional;
import org.owasp.encoder.Encode;

/** All experiments on one page, the ones that need somebody first. */
final class OverviewPage {

    private OverviewPage() {}

    static String title(List<Standing> standings, MonitorState monitor) {
        if (!monitor.atWork()) {
            return Wording.NOT_AT_WORK;
        }
        if (monitor.unkeyed()) {
            return Wording.NOT_KEYED;
        }
        if (standings.isEmpty()) {
            return "No experiment";
        }
        long attention = attention(standings);
        if (attention == 0 && !monitor.noted().isEmpty()) {
            return "Plan files need attention";
        }
        return attention == 0 ? "All quiet" : attention + (attention == 1 ? " needs" : " need") + " attention";
    }

    static void write(Markup html, List<Standing> standings, MonitorState monitor, Instant now) {
        html.leaf("h1", headline(standings, monitor));
        if (standings.isEmpty()) {
            html.open("p")
                    .text("This instance decides about no experiment. Another instance may, or none is planned."
                            + " Whether this one is at work is told at ");
            html.leaf("a", "/health/ready", "href", "/health/ready").text(".").close();
        }
        for (Urgency urgency : Urgency.values()) {
            List<Standing> group = standings.stream()
                    .filter(standing -> standing.urgency() == urgency)
                    .sorted(Comparator.comparing(standing -> !standing.harm()))
                    .toList();
            if (!group.isEmpty()) {
                html.open("section", "class", "group").leaf("h2", urgency.heading());
                html.open("div", "class", "cards");
                group.forEach(standing -> card(html, standing, now));
                html.close().close();
            }
        }
        if (monitor.rejected() > 0) {
            html.leaf(
                    "p",
                    "Rejected records since the first event: " + Figures.count(monitor.rejected())
                            + " (kept in the topic …-rejects with their reasons)",
                    "class",
                    "note");
        }
    }

    private static String headline(List<Standing> standings, MonitorState monitor) {
        if (!monitor.atWork()) {
            return "Monitor not at work; "
                    + (standings.isEmpty() ? "no experiment is known" : "last known: " + known(standings, monitor));
        }
        if (standings.isEmpty()) {
            return monitor.unkeyed() ? "No experiment, and input not keyed by unit" : "No experiment on this instance";
        }
        long attention = attention(standings);
        return monitor.unkeyed() || attention == 0
                ? known(standings, monitor)
                : attention + " of " + experiments(standings) + (attention == 1 ? " needs" : " need") + " attention";
    }

    private static String known(List<Standing> standings, MonitorState monitor) {
        if (monitor.unkeyed()) {
            return experiments(standings) + ", input not keyed by unit: no rate to act on";
        }
        long attention = attention(standings);
        if (attention == 0 && !monitor.noted().isEmpty()) {
            return experiments(standings) + ", plan files need attention";
        }
        return experiments(standings)
                + (attention == 0
                        ? ", nothing needs attention"
                        : ", " + attention + (attention == 1 ? " needs" : " need") + " attention");
    }

    private static String experiments(List<Standing> standings) {
        return standings.size() + (standings.size() == 1 ? " experiment" : " experiments");
    }

    private static long attention(List<Standing> standings) {
        return standings.stream()
                .filter(standing -> standing.urgency() == Urgency.ATTENTION)
                .count();
    }

    private static void card(Markup html, Standing standing, Instant now) {
        String kind = standing.harm() || standing.view().trust() == Trust.SOUND
                ? "verdict-" + standing.worst().code()
                : "trust-" + standing.view().trust().code();
        html.open("article", "class", "card " + kind).open("header").open("h3");
        html.leaf("a", standing.name(), "href", path(standing)).close();
        badges(html, standing);
        html.close().leaf("p", standing.view().plan().question(), "class", "question");
        if (!standing.view().trustReason().isEmpty()) {
            html.leaf("p", Figures.prose(standing.view().trustReason()), "class", "reason");
        }
        if (standing.urgency() == Urgency.ATTENTION) {
            html.open("p").leaf("b", "What to do: ").text(action(standing)).close();
        }
        for (Variant challenger : standing.challengers()) {
            comparison(html, standing, challenger);
        }
        html.open("dl", "class", "facts");
        fact(html, "Run", run(standing));
        fact(html, "Complete until", completeUntil(standing, now));
        fact(html, "Looks", looks(standing));
        fact(html, "Shares", shares(standing));
        html.close().close();
    }

    /** Harm comes first: its verdict is final and was reached while the data were trusted. Then broken trust. */
    private static String action(Standing standing) {
        return standing.harm() || standing.view().trust() == Trust.SOUND
                ? standing.action(standing.worst())
                : Wording.of(standing.view().trust()).action();
    }

    static void badges(Markup html, Standing standing) {
        html.open("p", "class", "badges");
        Frame.badge(
                html,
                "verdict",
                standing.view().verdict().code(),
                Wording.of(standing.view().verdict()));
        html.text(" ");
        Frame.badge(
                html,
                "trust",
                standing.view().trust().code(),
                Wording.of(standing.view().trust()));
        if (standing.held()) {
            html.text(" ").leaf("span", "a verdict is held", "class", "badge held");
        }
        html.close();
    }

    private static void comparison(Markup html, Standing standing, Variant challenger) {
        Optional<Comparison> latest = standing.latest(challenger);
        html.open("div", "class", "comparison").open("p");
        html.leaf("b", challenger.name());
        html.text(" against " + standing.view().plan().control().name());
        if (standing.challengers().size() > 1) {
            html.text(": " + Wording.of(standing.verdictOn(challenger)).label().toLowerCase(Locale.ROOT));
        }
        html.close();
        if (latest.isPresent()) {
            Comparison look = latest.get();
            ZStrip.draw(html, look, standing.higherIsBetter());
            html.open("p", "class", "figures").text("z ").leaf("b", Figures.decimal(look.z()));
            html.text(", " + ZStrip.boundaries(look) + ", information "
                    + Figures.wholePercent(look.informationFraction()));
            html.close();
        } else {
            html.leaf("p", "no look yet", "class", "figures");
        }
        html.close();
    }

    static String run(Standing standing) {
        Duration most = standing.length();
        return Figures.wholePercent(standing.runFraction()) + " of " + Figures.span(most) + " at most";
    }

    static String completeUntil(Standing standing, Instant now) {
        return standing.view()
                .completeUntil()
                .map(end -> Figures.minute(end)
                        + (end.isAfter(now) ? "" : ", " + Figures.span(Duration.between(end, now)) + " ago"))
                .orElse("no window is complete yet");
    }

    static String looks(Standing standing) {
        int delayed = standing.view().looksDelayed();
        String taken = Figures.count(standing.view().looksTaken()) + " taken";
        return delayed == 0
                ? taken
                : taken + ", " + Figures.count(delayed) + " delayed: "
                        + standing.view().delayReason();
    }

    private static String shares(Standing standing) {
        List<Integer> epochs = standing.epochs();
        if (epochs.isEmpty()) {
            return "no trial yet";
        }
        int epoch = epochs.get(epochs.size() - 1);
        double[] plan = standing.view().plan().sharesIn(epoch);
        double total = standing.unitsIn(epoch);
        StringBuilder text = new StringBuilder();
        List<Variant> variants = standing.view().plan().variants();
        for (int i = 0; i < variants.size(); i++) {
            text.append(i == 0 ? "" : " · ")
                    .append(variants.get(i).name())
                    .append(' ')
                    .append(Figures.percent(standing.units(variants.get(i), epoch) / total))
                    .append(" (planned ")
                    .append(Figures.percent(plan[i]))
                    .append(')');
        }
        return text.toString();
    }

    static void fact(Markup html, String name, String value) {
        html.open("div").leaf("dt", name).leaf("dd", value).close();
    }

    private static String path(Standing standing) {
        return "/experiments/" + Encode.forUriComponent(standing.name());
    }
}
