package io.tallyward.service.page;

import io.tallyward.engine.decide.ExperimentView.LookPoint;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.service.page.Table.Column;
import java.util.ArrayList;
import java.util.Collections;
import java.util.List;

/** Every look that is kept, newest first. */
final class LookTable {

    /** Rows shown at once; the others fold away below. */
    private static final int SHOWN = 12;

    private LookTable() {}

    static void write(Markup html, Standing standing) {
        html.open("section").leaf("h2", "Looks");
        List<LookPoint> looks = new ArrayList<>(standing.view().history());
        Collections.reverse(looks);
        if (looks.isEmpty()) {
            html.leaf("p", "No look has been taken yet.");
        } else {
            table(html, "Looks, newest first", looks.subList(0, Math.min(SHOWN, looks.size())));
        }
        if (looks.size() > SHOWN) {
            html.open("details", "id", "older-looks").leaf("summary", "Older looks: " + (looks.size() - SHOWN));
            table(html, "Older looks, newest first", looks.subList(SHOWN, looks.size()));
            html.close();
        }
        html.leaf(
                "p",
                "Differences are those of the rates, variant minus control, in percentage points; the intervals are"
                        + " repeated confidence intervals, valid at every look. The difference itself is naive: not"
                        + " adjusted for the looks taken. Where a comparison has ended, the adjusted estimate stands"
                        + " with its path above.",
                "class",
                "note");
        html.close();
    }

    private static void table(Markup html, String caption, List<LookPoint> looks) {
        Table table = Table.open(
                html,
                caption,
                Column.text("Look"),
                Column.text("Data until, UTC"),
                Column.text("Variant"),
                Column.text("Verdict"),
                Column.number("z"),
                Column.number("Boundaries"),
                Column.number("Information"),
                Column.number("Difference"),
                Column.number("Interval"),
                Column.number("Futility"),
                Column.number("Alpha spent"));
        for (LookPoint point : looks) {
            Comparison look = point.comparison();
            table.row(Integer.toString(look.look()))
                    .text(Figures.shortMinute(point.windowEnd()))
                    .text(look.variant())
                    .cell(() -> verdict(html, look))
                    .number(Figures.decimal(look.z()))
                    .number(boundaries(look))
                    .number(Figures.wholePercent(look.informationFraction()))
                    .number(Figures.points(look.difference()))
                    .number(interval(look))
                    .number(Figures.decimal(look.futility()))
                    .number(Figures.probability(look.alphaSpent()))
                    .endRow();
            if (look.reason() != null && !look.reason().isEmpty()) {
                table.remark("Why: " + Figures.prose(look.reason()));
            }
        }
        table.close();
    }

    private static String boundaries(Comparison look) {
        return look.lower() == null && look.upper() == null
                ? Figures.NONE
                : Figures.decimal(look.lower()) + " / " + Figures.decimal(look.upper());
    }

    /** A repeated confidence interval in percentage points; one end may be open. */
    static String interval(Comparison look) {
        return EffectFacts.ends(EffectFacts.points(look.differenceLower()), EffectFacts.points(look.differenceUpper()));
    }

    private static void verdict(Markup html, Comparison look) {
        html.text(Wording.of(look.verdict()).label());
        if (look.held() != null) {
            html.text(" (held: " + Wording.of(look.held()).label() + ")");
        }
    }
}
