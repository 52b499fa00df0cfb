package io.tallyward.service.page;

import io.tallyward.engine.decide.ExperimentView.LookPoint;
import io.tallyward.engine.record.DecisionRecord.Comparison;
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
                        + " repeated confidence intervals, valid at every look. The difference itself is not adjusted"
                        + " for stopping.",
                "class",
                "note");
        html.close();
    }

    private static void table(Markup html, String caption, List<LookPoint> looks) {
        Table table = Table.open(
                html,
                caption,
                "Look",
                "Data until",
                "Variant",
                "z",
                "Lower",
                "Upper",
                "Futility",
                "Information",
                "Alpha spent",
                "Difference",
                "Interval",
                "Verdict",
                "Why");
        for (LookPoint point : looks) {
            Comparison look = point.comparison();
            table.row(Integer.toString(look.look()))
                    .text(Figures.minute(point.windowEnd()))
                    .text(look.variant())
                    .number(Figures.decimal(look.z()))
                    .number(Figures.decimal(look.lower()))
                    .number(Figures.decimal(look.upper()))
                    .number(Figures.decimal(look.futility()))
                    .number(Figures.wholePercent(look.informationFraction()))
                    .number(Figures.probability(look.alphaSpent()))
                    .number(Figures.points(look.difference()))
                    .number(interval(look))
                    .cell(() -> verdict(html, look))
                    .text(look.reason() == null ? "" : look.reason())
                    .endRow();
        }
        table.close();
    }

    static String interval(Comparison look) {
        String lower = look.differenceLower() == null ? "unbounded" : Figures.points(look.differenceLower());
        String upper = look.differenceUpper() == null ? "unbounded" : Figures.points(look.differenceUpper());
        return lower + " to " + upper;
    }

    private static void verdict(Markup html, Comparison look) {
        html.text(Wording.of(look.verdict()).label());
        if (look.held() != null) {
            html.text(" (held: " + Wording.of(look.held()).label() + ")");
        }
    }
}
