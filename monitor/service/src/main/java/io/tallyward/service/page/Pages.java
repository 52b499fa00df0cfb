package io.tallyward.service.page;

import io.tallyward.engine.decide.ExperimentView;
import java.io.IOException;
import java.io.InputStream;
import java.io.UncheckedIOException;
import java.nio.charset.StandardCharsets;
import java.time.Clock;
import java.time.Instant;
import java.util.Collection;
import java.util.List;
import java.util.Objects;

/** Renders every page. Thread-safe. */
public final class Pages {

    private static final String STYLE_SHEET = resource("page.css");
    private static final String SCRIPT = resource("live.js");
    private static final String MARK = resource("mark.svg");

    private final Clock clock;

    /** @param clock tells how old the data are; nothing else depends on it */
    public Pages(Clock clock) {
        this.clock = clock;
    }

    /**
     * All experiments, problems first.
     *
     * @param views the experiments, in the order to keep among equally urgent ones
     * @param monitor how the monitor itself is
     */
    public String overview(Collection<ExperimentView> views, MonitorState monitor) {
        List<Standing> standings = views.stream().map(Standing::new).toList();
        Instant now = clock.instant();
        return Frame.page(
                OverviewPage.title(standings, monitor),
                now,
                monitor,
                html -> OverviewPage.write(html, standings, monitor, now));
    }

    /**
     * One experiment.
     *
     * @param monitor how the monitor itself is
     */
    public String experiment(ExperimentView view, MonitorState monitor) {
        Standing standing = new Standing(view);
        Instant now = clock.instant();
        return Frame.page(
                ExperimentPage.title(standing, monitor),
                now,
                monitor,
                html -> ExperimentPage.write(html, standing, now));
    }

    /** The answer when there is no such page. */
    public String notFound() {
        return Frame.page("Not here", clock.instant(), new MonitorState(List.of(), false, 0), html -> {
            html.leaf("h1", "There is no such page on this instance");
            html.open("p").text("An experiment may be decided by another instance of the monitor. ");
            html.leaf("a", "What this one knows", "href", "/").text(".").close();
        });
    }

    /** The style sheet of all pages. */
    public static String styleSheet() {
        return STYLE_SHEET;
    }

    /** The script of all pages: fetches the page again from time to time and shows when that fails. */
    public static String script() {
        return SCRIPT;
    }

    /** The program's mark, as an SVG image. */
    public static String mark() {
        return MARK;
    }

    private static String resource(String name) {
        try (InputStream stream = Pages.class.getResourceAsStream(name)) {
            return new String(Objects.requireNonNull(stream, name).readAllBytes(), StandardCharsets.UTF_8);
        } catch (IOException e) {
            throw new UncheckedIOException(name + " cannot be read from the program's own jar", e);
        }
    }
}
