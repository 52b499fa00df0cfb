package io.tallyward.service.page;

import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.service.page.Table.Column;
import java.util.List;
import org.apache.commons.math3.distribution.NormalDistribution;

/** The shares of the variants against the plan, epoch by epoch, and what the split checks say. */
final class SplitSection {

    private SplitSection() {}

    static void write(Markup html, Standing standing) {
        html.open("section").leaf("h2", "Split check");
        double alpha = standing.view().plan().splitCheck().alpha();
        if (standing.epochs().isEmpty()) {
            html.leaf("p", "No trial in a complete window yet.");
        }
        for (int epoch : standing.epochs()) {
            epoch(html, standing, epoch, alpha);
        }
        checks(html, standing.view().split(), alpha);
        if (standing.view().split().origin() != null) {
            OriginSection.write(html, standing.view().split().origin(), alpha);
        }
        html.close();
    }

    private static void epoch(Markup html, Standing standing, int epoch, double alpha) {
        boolean several = standing.view().plan().epochCount() > 1;
        Table table = Table.open(
                html,
                "Shares against the plan" + (several ? ", allocation epoch " + epoch : ""),
                Column.text("Variant"),
                Column.number(standing.countsViews() ? "Units" : "Trials"),
                Column.number("Share"),
                Column.number("Planned"),
                Column.number("Off by, points"),
                Column.text(""));
        List<Variant> variants = standing.view().plan().variants();
        double[] plan = standing.view().plan().sharesIn(epoch);
        double[] bands = new double[plan.length];
        double widest = 0;
        long total = standing.unitsIn(epoch);
        for (int i = 0; i < plan.length; i++) {
            double share = standing.units(variants.get(i), epoch) / (double) total;
            bands[i] = band(plan[i], total, alpha);
            widest = Math.max(widest, Math.max(Math.abs(share - plan[i]), bands[i]));
        }
        for (int i = 0; i < plan.length; i++) {
            long units = standing.units(variants.get(i), epoch);
            double share = units / (double) total;
            double planned = plan[i];
            double[] range = {planned - bands[i], planned + bands[i]};
            RangeBar bar = new RangeBar(planned - widest * 1.1, planned + widest * 1.1);
            String words = "share " + Figures.percent(share) + ", band of the plan " + Figures.percent(range[0])
                    + " to " + Figures.percent(range[1]);
            table.row(variants.get(i).name())
                    .number(Figures.count(units))
                    .number(Figures.percent(share))
                    .number(Figures.percent(planned))
                    .number(Figures.points(share - planned))
                    .cell(() -> bar.draw(html, words, range, planned, share))
                    .endRow();
        }
        table.close();
    }

    /**
     * Half the width of the range in which one reading of a planned share lies with probability 1 - alpha: normal
     * approximation to the binomial law. A picture only; the check itself is sequential and needs no band.
     */
    private static double band(double planned, long total, double alpha) {
        double quantile = new NormalDistribution(null, 0, 1).inverseCumulativeProbability(1 - alpha / 2);
        return quantile * Math.sqrt(planned * (1 - planned) / total);
    }

    private static void checks(Markup html, Split split, double alpha) {
        html.open("dl", "class", "facts");
        OverviewPage.fact(
                html,
                "Sequential p-value",
                Figures.pValue(split.sequentialPValue()) + " (a mismatch at " + alpha
                        + " or less; may be read after every window)");
        OverviewPage.fact(
                html,
                "Evidence against the plan",
                "natural logarithm of the Bayes factor " + Figures.decimal(split.logBayesFactor()));
        String pearson = split.pearsonDegreesOfFreedom() == 0
                ? "no trial yet"
                : "chi-square " + Figures.decimal(split.pearsonChiSquare()) + " with "
                        + split.pearsonDegreesOfFreedom()
                        + (split.pearsonDegreesOfFreedom() == 1 ? " degree" : " degrees") + " of freedom, p "
                        + Figures.pValue(split.pearsonPValue()) + " (for a single reading only)";
        OverviewPage.fact(html, "Pearson, for the record", pearson);
        html.close();
        html.leaf(
                "p",
                "Shaded: where one reading of the share lies with probability " + (1 - alpha)
                        + " if the plan holds. The line is the plan, the dot is what was counted.",
                "class",
                "note");
    }
}
