package io.tallyward.service.page;

import io.tallyward.engine.record.DecisionRecord.Comparison;
import java.util.List;
import java.util.Objects;
import java.util.function.Function;

/**
 * The path of z over the information fraction, against its boundaries. Zones beyond a boundary carry the word for what a
 * crossing there means; points are looks.
 */
final class PathChart {

    private static final double WIDTH = 420;
    private static final double HEIGHT = 270;
    private static final double LEFT = 34;
    private static final double RIGHT = 10;
    private static final double TOP = 10;
    private static final double BOTTOM = 38;

    /** Boundaries of early looks can lie far out; beyond this they are cut off at the rim. */
    private static final double LEAST_REACH = 4.5;

    private final Markup html;
    private final List<Comparison> looks;
    private final boolean higherIsBetter;
    private final double last;
    private final double reach;

    private PathChart(Markup html, List<Comparison> looks, boolean higherIsBetter) {
        this.html = html;
        this.looks = looks;
        this.higherIsBetter = higherIsBetter;
        this.last = Math.max(
                1,
                looks.stream()
                        .mapToDouble(Comparison::informationFraction)
                        .max()
                        .orElse(1));
        this.reach = Math.max(
                LEAST_REACH,
                looks.stream().mapToDouble(look -> Math.abs(look.z())).max().orElse(0) + 0.5);
    }

    /** Draws the looks at one challenger, in order; a look without a finite z has no place in the picture. */
    static void draw(Markup html, List<Comparison> looks, boolean higherIsBetter) {
        List<Comparison> drawable = looks.stream()
                .filter(look -> Double.isFinite(look.z()) && Double.isFinite(look.informationFraction()))
                .toList();
        if (!drawable.isEmpty()) {
            new PathChart(html, drawable, higherIsBetter).draw();
        }
    }

    private void draw() {
        Comparison latest = looks.get(looks.size() - 1);
        String words = "Path of z over " + looks.size() + (looks.size() == 1 ? " look" : " looks")
                + "; at the latest, at information " + Figures.wholePercent(latest.informationFraction()) + ", "
                + ZStrip.words(latest) + ".";
        html.open("svg", "class", "path", "viewBox", "0 0 420 270", "role", "img", "aria-label", words);
        html.empty(
                "rect",
                "x",
                at(LEFT),
                "y",
                at(TOP),
                "width",
                at(WIDTH - LEFT - RIGHT),
                "height",
                at(HEIGHT - TOP - BOTTOM),
                "class",
                "inside");
        zone(Comparison::upper, reach, higherIsBetter ? "benefit" : "harm");
        zone(Comparison::lower, -reach, higherIsBetter ? "harm" : "benefit");
        axes();
        word("benefit", higherIsBetter);
        if (looks.stream().map(this::harmBoundary).anyMatch(Objects::nonNull)) {
            word("harm", !higherIsBetter);
        }
        line(Comparison::upper, "bound");
        line(Comparison::lower, "bound");
        line(look -> look.futility() == null ? null : higherIsBetter ? look.futility() : -look.futility(), "futility");
        line(Comparison::z, "z");
        looks.forEach(look -> point(look, look == latest));
        html.close();
    }

    /** The area between a boundary and the rim, as far as there is a boundary. */
    private void zone(Function<Comparison, Double> boundary, double rim, String word) {
        List<Comparison> bounded =
                looks.stream().filter(look -> boundary.apply(look) != null).toList();
        if (bounded.isEmpty()) {
            return;
        }
        Comparison first = bounded.get(0);
        Comparison end = bounded.get(bounded.size() - 1);
        StringBuilder area =
                new StringBuilder("M").append(at(x(first))).append(' ').append(at(y(rim)));
        bounded.forEach(look -> area.append('L').append(at(x(look))).append(' ').append(at(y(boundary.apply(look)))));
        area.append('L').append(at(x(end))).append(' ').append(at(y(rim))).append('Z');
        html.empty("path", "d", area.toString(), "class", "zone-" + word);
    }

    /** Null where a crossing at this look cannot mean harm. */
    private Double harmBoundary(Comparison look) {
        return higherIsBetter ? look.lower() : look.upper();
    }

    private void word(String word, boolean above) {
        double y = above ? TOP + 14 : HEIGHT - BOTTOM - 6;
        html.leaf("text", word, "x", at(LEFT + 6), "y", at(y), "class", "word-" + word);
    }

    private void axes() {
        int step = reach > 8 ? (int) Math.ceil(reach / 4) : 2;
        for (int z = -(int) reach / step * step; z <= reach; z += step) {
            segment(LEFT, y(z), WIDTH - RIGHT, y(z), z == 0 ? "zero" : "grid");
            label(Figures.count(z), LEFT - 6, y(z) + 4, "end");
        }
        int percentStep = 25 * (int) Math.ceil(last / 1.5);
        for (int percent = 0; percent <= last * 100 + 1; percent += percentStep) {
            double x = x(percent / 100.0);
            segment(x, HEIGHT - BOTTOM, x, HEIGHT - BOTTOM + 4, "zero");
            label(percent + " %", x, HEIGHT - BOTTOM + 17, "middle");
        }
        label("information, of the planned maximum", (LEFT + WIDTH - RIGHT) / 2, HEIGHT - 4, "middle");
        label("z", 6, TOP + 10, "start");
    }

    private void segment(double x1, double y1, double x2, double y2, String style) {
        html.empty("line", "x1", at(x1), "y1", at(y1), "x2", at(x2), "y2", at(y2), "class", style);
    }

    private void label(String text, double x, double y, String anchor) {
        html.leaf("text", text, "x", at(x), "y", at(y), "text-anchor", anchor);
    }

    private void line(Function<Comparison, Double> value, String style) {
        StringBuilder points = new StringBuilder();
        for (Comparison look : looks) {
            Double z = value.apply(look);
            if (z != null) {
                points.append(at(x(look))).append(',').append(at(y(z))).append(' ');
                tick(x(look), y(z), style);
            }
        }
        if (points.length() > 0) {
            html.empty("polyline", "points", points.toString().trim(), "class", "line-" + style);
        }
    }

    /** Marks the value at one look, which a line through a single point would not show. */
    private void tick(double x, double y, String style) {
        if (!style.equals("z")) {
            segment(x - 4, y, x + 4, y, "tick-" + style);
        }
    }

    private void point(Comparison look, boolean latest) {
        html.open("circle", "cx", at(x(look)), "cy", at(y(look.z())), "r", latest ? "6" : "3", "class", "dot");
        html.leaf("title", "look " + look.look() + ": " + ZStrip.words(look)).close();
    }

    private double x(Comparison look) {
        return x(look.informationFraction());
    }

    private double x(double fraction) {
        return LEFT + fraction / last * (WIDTH - LEFT - RIGHT - 14);
    }

    private double y(double z) {
        double clipped = Math.max(-reach, Math.min(reach, z));
        return TOP + (reach - clipped) / (2 * reach) * (HEIGHT - TOP - BOTTOM);
    }

    private static String at(double coordinate) {
        return Figures.coordinate(coordinate);
    }
}
