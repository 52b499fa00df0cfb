package io.tallyward.service.page;

/**
 * A small picture of a value with a range around it, and of the mark it should be at.
 *
 * @param left value at the left rim
 * @param right value at the right rim, more than {@code left}
 */
record RangeBar(double left, double right) {

    private static final double WIDTH = 180;
    private static final double RIM = 6;

    /**
     * Draws one bar.
     *
     * @param words the same in words
     * @param range the range to shade, as lower and upper end
     * @param mark where a line is drawn, or null
     * @param value where the dot is drawn
     */
    void draw(Markup html, String words, double[] range, Double mark, double value) {
        html.open("svg", "class", "range", "viewBox", "0 0 180 20", "role", "img", "aria-label", words);
        html.empty("line", "x1", "0", "x2", "180", "y1", "10", "y2", "10", "class", "grid");
        double from = x(range[0]);
        double to = x(range[1]);
        html.empty(
                "rect",
                "x",
                Figures.coordinate(from),
                "y",
                "5",
                "width",
                Figures.coordinate(Math.max(1.5, to - from)),
                "height",
                "10",
                "class",
                "band");
        if (mark != null) {
            String x = Figures.coordinate(x(mark));
            html.empty("line", "x1", x, "x2", x, "y1", "1", "y2", "19", "class", "bound");
        }
        html.empty("circle", "cx", Figures.coordinate(x(value)), "cy", "10", "r", "4.5", "class", "dot");
        html.close();
    }

    private double x(double value) {
        double share = (value - left) / (right - left);
        return RIM + Math.max(0, Math.min(1, share)) * (WIDTH - 2 * RIM);
    }
}
