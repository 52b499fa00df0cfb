package io.tallyward.service.page;

import io.tallyward.engine.plan.Variant;
import io.tallyward.service.page.Table.Column;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.ratio.RatioEstimate;
import java.util.ArrayList;
import java.util.List;
import org.apache.commons.math3.stat.interval.ConfidenceInterval;
import org.apache.commons.math3.stat.interval.WilsonScoreInterval;

/** The rates, each with an interval, and the differences that the test is about. */
final class RateSection {

    /** For reading one rate; common practice. The intervals that count are those of the differences. */
    private static final double CONFIDENCE = 0.95;

    /** Of the standard normal distribution, for that confidence. */
    private static final double QUANTILE = Normal.quantile((1 + CONFIDENCE) / 2);

    private RateSection() {}

    static void write(Markup html, Standing standing) {
        html.open("section").leaf("h2", "Rates");
        List<Variant> variants = standing.view().plan().variants();
        RangeBar bar = scale(standing, variants);
        Table table = Table.open(html, "Rates over all complete windows", columns(standing.countsViews()));
        for (Variant variant : variants) {
            row(html, table, bar, standing, variant);
        }
        table.close();
        html.leaf(
                "p",
                (standing.countsViews()
                                ? "Intervals by the variance between units, as views of a unit are not independent;"
                                        + " for reading one rate at one time. Whether"
                                : "Wilson intervals, for reading one rate at one time. Whether")
                        + " rates differ is not read from them but from"
                        + " the looks below. The rates are naive: after an early stop they tend to lie further apart than"
                        + " in truth.",
                "class",
                "note");
        html.close();
    }

    private static void row(Markup html, Table table, RangeBar bar, Standing standing, Variant variant) {
        long trials = standing.trials(variant);
        long successes = standing.successes(variant);
        table.row(variant.name() + (variant.control() ? " (control)" : ""));
        if (standing.countsViews()) {
            table.number(Figures.count(standing.units(variant)));
        }
        table.number(Figures.count(trials)).number(Figures.count(successes));
        double[] interval = interval(standing, variant);
        if (interval == null) {
            table.number(Figures.NONE).number(Figures.NONE).text("").endRow();
            return;
        }
        double rate = successes / (double) trials;
        String ends = Figures.percent(interval[0]) + " to " + Figures.percent(interval[1]);
        table.number(Figures.percent(rate)).number(ends);
        table.cell(() -> bar.draw(html, "rate " + Figures.percent(rate) + ", from " + ends, interval, null, rate))
                .endRow();
    }

    private static RangeBar scale(Standing standing, List<Variant> variants) {
        double left = 1;
        double right = 0;
        for (Variant variant : variants) {
            double[] interval = interval(standing, variant);
            if (interval != null) {
                left = Math.min(left, interval[0]);
                right = Math.max(right, interval[1]);
            }
        }
        return left < right ? new RangeBar(left, right) : new RangeBar(0, 1);
    }

    private static Column[] columns(boolean views) {
        List<Column> columns = new ArrayList<>();
        columns.add(Column.text("Variant"));
        if (views) {
            columns.add(Column.number("Units"));
        }
        columns.add(Column.number(views ? "Views" : "Trials"));
        columns.add(Column.number(views ? "Clicked views" : "Successes"));
        columns.add(Column.number("Rate"));
        columns.add(Column.number("95 % interval"));
        columns.add(Column.text(""));
        return columns.toArray(Column[]::new);
    }

    /** Null where there is no interval. */
    private static double[] interval(Standing standing, Variant variant) {
        return standing.countsViews()
                ? standing.unitSums(variant)
                        .flatMap(RatioEstimate::of)
                        .map(RateSection::interval)
                        .orElse(null)
                : interval(standing.trials(variant), standing.successes(variant));
    }

    /** The normal interval of a ratio, cut off where rates end. */
    private static double[] interval(RatioEstimate ratio) {
        double half = QUANTILE * Math.sqrt(ratio.variance());
        return new double[] {Math.max(0, ratio.ratio() - half), Math.min(1, ratio.ratio() + half)};
    }

    /** Null where there is no interval: without trials, or with more than the library counts. */
    private static double[] interval(long trials, long successes) {
        if (!(trials > 0 && trials <= Integer.MAX_VALUE && successes <= trials)) {
            return null;
        }
        ConfidenceInterval interval =
                new WilsonScoreInterval().createInterval((int) trials, (int) successes, CONFIDENCE);
        return new double[] {interval.getLowerBound(), interval.getUpperBound()};
    }
}
