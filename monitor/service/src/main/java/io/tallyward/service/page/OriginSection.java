package io.tallyward.service.page;

import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import io.tallyward.service.page.Table.Column;
import java.util.List;

/** Where a mismatch of the split comes from: since when, and which segment is furthest off the plan. */
final class OriginSection {

    private OriginSection() {}

    static void write(Markup html, SplitOrigin origin, double alpha) {
        html.open("dl", "class", "facts");
        OverviewPage.fact(
                html,
                "Mismatch began",
                "between " + Figures.minute(origin.beganFrom()) + " and " + Figures.minute(origin.beganUntil())
                        + " (other shares than the planned ones explain the counts best from there on)");
        OverviewPage.fact(html, "Furthest off", furthest(origin.worst(), alpha));
        html.close();
        Table table = Table.open(
                html,
                "Where the mismatch comes from",
                Column.text("Which units"),
                Column.text("Variant"),
                Column.number("Units"),
                Column.number("Share"),
                Column.number("Planned"),
                Column.number("Off by, points"));
        rows(table, "since it began", origin.since());
        if (origin.worst() != null) {
            String name = origin.worst().field() + " " + origin.worst().value();
            rows(table, name, origin.worst().units());
            rows(table, "other than " + name, origin.worst().elsewhere());
        }
        table.close();
    }

    private static String furthest(SegmentSplit worst, double alpha) {
        if (worst == null) {
            return "not known: the plan names no segments (split-check.segments), or none has enough units";
        }
        String judged =
                " of " + worst.judged() + (worst.judged() == 1 ? " segment" : " segments") + " (against the plan p "
                        + Figures.pValue(worst.adjustedPValue()) + ", against the other units p "
                        + Figures.pValue(worst.contrastPValue()) + ")";
        return worst.standsOut()
                ? worst.field() + " " + worst.value() + judged
                : "no single segment stands out at " + alpha + "; the first is " + worst.field() + " " + worst.value()
                        + judged;
    }

    private static void rows(Table table, String name, List<PlannedUnits> units) {
        double total = units.stream().mapToLong(PlannedUnits::units).sum();
        for (PlannedUnits variant : units) {
            double share = total == 0 ? 0 : variant.units() / total;
            table.row(name)
                    .text(variant.variant())
                    .number(Figures.count(variant.units()))
                    .number(total == 0 ? "-" : Figures.percent(share))
                    .number(Figures.percent(variant.planned()))
                    .number(total == 0 ? "-" : Figures.points(share - variant.planned()))
                    .endRow();
        }
    }
}
