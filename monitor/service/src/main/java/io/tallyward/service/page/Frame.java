package io.tallyward.service.page;

import io.tallyward.service.page.Wording.Words;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import java.time.Instant;
import java.util.List;
import java.util.Locale;
import java.util.function.Consumer;

/** What surrounds the contents of every page. */
final class Frame {

    private Frame() {}

    static String page(String title, Instant now, List<Health> checks, Consumer<Markup> contents) {
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
        health(html, checks);
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

    private static void health(Markup html, List<Health> checks) {
        List<Health> problems =
                checks.stream().filter(check -> check.state() != State.OK).toList();
        if (problems.isEmpty()) {
            return;
        }
        html.open("section", "class", "banner problem", "aria-label", "Problems of the monitor itself");
        html.leaf("strong", "The monitor itself is not fully at work; what follows may be old.")
                .open("ul");
        for (Health check : problems) {
            html.open("li").leaf("b", check.name());
            html.text(" (" + check.state().name().toLowerCase(Locale.ROOT) + "): " + check.detail())
                    .close();
        }
        html.close().close();
    }
}
