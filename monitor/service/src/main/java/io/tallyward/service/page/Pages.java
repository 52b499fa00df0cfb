package io.tallyward.service.page;

import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.service.status.HealthSource.Health;
import java.io.IOException;
import java.io.InputStream;
import java.io.UncheckedIOException;
import java.nio.charset.StandardCharsets;
import java.time.Clock;
import java.util.Collection;
import java.util.List;
import java.util.Objects;

/** Renders every page. Thread-safe. */
public final class Pages {

    private static final String STYLE_SHEET = resource("page.css");
    private static final String SCRIPT = resource("live.js");

    private final Clock clock;

    /** @param clock tells how old the data are; nothing else depends on it */
    public Pages(Clock clock) {
        this.clock = clock;
    }

    /** All experiments, problems first. */
    public String overview(Collection<ExperimentView> views, List<Health> checks) {
        return "" + clock + views + checks;
    }

    /** One experiment. */
    public String experiment(ExperimentView view, List<Health> checks) {
        return "" + clock + view + checks;
    }

    /** The answer when there is no such page. */
    public String notFound() {
        return "";
    }

    /** The style sheet of all pages. */
    public static String styleSheet() {
        return STYLE_SHEET;
    }

    /** The script of all pages: fetches the page again from time to time and shows when that fails. */
    public static String script() {
        return SCRIPT;
    }

    private static String resource(String name) {
        try (InputStream stream = Pages.class.getResourceAsStream(name)) {
            return new String(Objects.requireNonNull(stream, name).readAllBytes(), StandardCharsets.UTF_8);
        } catch (IOException e) {
            throw new UncheckedIOException(name + " cannot be read from the program's own jar", e);
        }
    }
}
