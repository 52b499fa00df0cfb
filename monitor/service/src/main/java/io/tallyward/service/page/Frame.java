package io.tallyward.service.page;

import io.tallyward.service.page.Wording.Words;
import io.tallyward.service.status.HealthSource.Health;
import java.time.Instant;
import java.util.List;
import java.util.Locale;
import java.util.function.Consumer;

/** What surrounds the contents of every page. */
final class Frame {

    private Frame() {}

    static String page(String title, Instant now, MonitorState monitor, Consumer<Markup> contents) {
        Markup html = new Markup();
        html.open("html", "lang", "en").open("head");
        html.empty("meta", "charset", "utf-8");
        html.empty("meta", "name", "viewport", "content", "width=device-width, initial-scale=1");
        html.empty("meta", "name", "color-scheme", "content", "light dark");
        html.leaf("title", title + " · Tallyward");
        html.empty("link", "rel", "stylesheet", "href", "/assets/page.css");
        html.empty("link", "rel", "icon", "href", "/assets/mark.svg", "type", "image/svg+xml");
        html.open("noscript")
                .empty("meta", "http-equiv", "refresh", "content", "30")
                .close();
        html.leaf("script", "", "src", "/assets/live.js", "defer", "defer").close();
        html.open("body").open("header", "class", "top");
        html.leaf("a", "Tallyward", "href", "/", "class", "home");
        html.leaf("span", "as of " + Figures.second(now), "class", "now", "id", "now")
                .close();
        html.leaf("p", "", "id", "stale", "class", "banner stale", "role", "alert", "hidden", "hidden");
        html.open("main", "id", "main");
        unkeyed(html, monitor);
        health(html, monitor);
        contents.accept(html);
        html.close().open("footer");
        html.leaf(
                "p",
                "Not for clinical or safety decisions. A verdict is advice under the plan; the plan's owner decides.");
        html.leaf("p", "All times are event time in UTC unless said otherwise. This page cannot change anything.");
        return html.close().close().close().document();
    }

    /** A state as sign and name; the colour only repeats what they say. */
    static void badge(Markup html, String kind, String code, Words words) {
        html.open("span", "class", "badge " + kind + "-" + code);
        html.leaf("span", words.sign(), "class", "sign", "aria-hidden", "true").text(" " + words.label());
        html.close();
    }

    /** Before everything else: no number on the page means what it says. */
    private static void unkeyed(Markup html, MonitorState monitor) {
        if (monitor.unkeyed()) {
            html.open("section", "class", "banner problem", "role", "alert");
            html.leaf("strong", Wording.UNKEYED).close();
        }
    }

    private static void health(Markup html, MonitorState monitor) {
        banner(html, "problem", "The monitor itself is not fully at work; what follows may be old.", monitor.failing());
        banner(html, "starting", "Counts and decisions are right; this needs attention all the same.", monitor.noted());
        banner(html, "starting", "Starting: what follows may be old or incomplete.", monitor.starting());
    }

    private static void banner(Markup html, String kind, String heading, List<Health> checks) {
        if (checks.isEmpty()) {
            return;
        }
        html.open("section", "class", "banner " + kind, "aria-label", "State of the monitor itself");
        html.leaf("strong", heading).open("ul");
        for (Health check : checks) {
            html.open("li").leaf("b", check.name());
            html.text(" (" + check.state().name().toLowerCase(Locale.ROOT) + "): " + check.detail())
                    .close();
        }
        html.close().close();
    }
}
