package io.tallyward.service.page;

import io.tallyward.engine.record.DecisionRecord.Comparison;

/** A narrow picture of one look: where z lies between its boundaries. */
final class ZStrip {

    private static final double WIDTH = 320;
    private static final double HALF = WIDTH / 2;
    private static final double MIDDLE = 12;

    /** A boundary beyond this is drawn at the rim: it stands for a tail that spends next to nothing. */
    private static final double FARTHEST = 6;

    private ZStrip() {}

    static void draw(Markup html, Comparison look, boolean higherIsBetter) {
        double reach = Math.min(FARTHEST, Math.max(4, Math.abs(look.z()) * 1.1));
        String above = higherIsBetter ? "benefit" : "harm";
        String below = higherIsBetter ? "harm" : "benefit";
        html.open("svg", "class", "strip", "viewBox", "0 0 320 24", "role", "img", "aria-label", words(look));
        bar(html, -reach, reach, reach, "inside");
        if (look.upper() != null) {
            bar(html, look.upper(), reach, reach, "zone-" + above);
        }
        if (look.lower() != null) {
            bar(html, -reach, look.lower(), reach, "zone-" + below);
        }
        html.empty(
                "line",
                "x1",
                Figures.coordinate(HALF),
                "x2",
                Figures.coordinate(HALF),
                "y1",
                "4",
                "y2",
                "20",
                "class",
                "zero");
        boundary(html, look.upper(), reach);
        boundary(html, look.lower(), reach);
        html.empty(
                "circle",
                "cx",
                Figures.coordinate(x(look.z(), reach)),
                "cy",
                Figures.coordinate(MIDDLE),
                "r",
                "6",
                "class",
                "dot");
        html.close();
    }

    /** The look in words. */
    static String words(Comparison look) {
        return "z " + Figures.decimal(look.z()) + ", " + boundaries(look);
    }

    static String boundaries(Comparison look) {
        if (look.lower() == null && look.upper() == null) {
            return "no boundary at this look";
        }
        String lower = look.lower() == null ? "no lower" : "lower " + Figures.decimal(look.lower());
        String upper = look.upper() == null ? "no upper" : "upper " + Figures.decimal(look.upper());
        return lower + ", " + upper;
    }

    private static void bar(Markup html, double from, double to, double reach, String style) {
        double left = x(from, reach);
        double width = x(to, reach) - left;
        if (width > 0) {
            html.empty(
                    "rect",
                    "x",
                    Figures.coordinate(left),
                    "y",
                    "8",
                    "width",
                    Figures.coordinate(width),
                    "height",
                    "8",
                    "class",
                    style);
        }
    }

    private static void boundary(Markup html, Double value, double reach) {
        if (value != null) {
            String x = Figures.coordinate(x(value, reach));
            html.empty("line", "x1", x, "x2", x, "y1", "2", "y2", "22", "class", "bound");
        }
    }

    private static double x(double z, double reach) {
        double clipped = Math.max(-reach, Math.min(reach, z));
        return HALF + clipped / reach * (HALF - 8);
    }
}
