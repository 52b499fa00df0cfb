package io.tallyward.service.page;

import io.tallyward.engine.record.DecisionRecord.Comparison;
import java.util.List;
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

    /** Draws the looks at one challenger, in order; at least one. */
    static void draw(Markup html, List<Comparison> looks, boolean higherIsBetter) {
        new PathChart(html, looks, higherIsBetter).draw();
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
        double textY = rim > 0 ? TOP + 14 : HEIGHT - BOTTOM - 6;
        html.leaf("text", word, "x", at(LEFT + 6), "y", at(textY), "class", "word-" + word, "text-anchor", "start");
    }

    private void axes() {
        int step = reach > 8 ? 4 : 2;
        for (int z = -(int) reach / step * step; z <= reach; z += step) {
            html.empty(
                    "line",
                    "x1",
                    at(LEFT),
                    "x2",
                    at(WIDTH - RIGHT),
                    "y1",
                    at(y(z)),
                    "y2",
                    at(y(z)),
                    "class",
                    z == 0 ? "zero" : "grid");
            html.leaf("text", Figures.count(z), "x", at(LEFT - 6), "y", at(y(z) + 4), "text-anchor", "end");
        }
        for (int percent = 0; percent <= last * 100 + 1; percent += 25) {
            double x = x(percent / 100.0);
            html.empty(
                    "line",
                    "x1",
                    at(x),
                    "x2",
                    at(x),
                    "y1",
                    at(HEIGHT - BOTTOM),
                    "y2",
                    at(HEIGHT - BOTTOM + 4),
                    "class",
                    "zero");
            html.leaf("text", percent + " %", "x", at(x), "y", at(HEIGHT - BOTTOM + 17), "text-anchor", "middle");
        }
        html.leaf(
                "text",
                "information, of the planned maximum",
                "x",
                at((LEFT + WIDTH - RIGHT) / 2),
                "y",
                at(HEIGHT - 4),
                "text-anchor",
                "middle",
                "class",
                "axis");
        html.leaf("text", "z", "x", at(6), "y", at(TOP + 10), "class", "axis");
    }

    private void line(Function<Comparison, Double> value, String style) {
        StringBuilder points = new StringBuilder();
        for (Comparison look : looks) {
            Double z = value.apply(look);
            if (z != null) {
                points.append(at(x(look))).append(',').append(at(y(z))).append(' ');
            }
        }
        if (points.length() > 0) {
            html.empty("polyline", "points", points.toString().trim(), "class", "line-" + style);
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
