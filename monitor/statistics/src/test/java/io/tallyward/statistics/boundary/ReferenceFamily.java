package io.tallyward.statistics.boundary;

import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.spending.SpendingFunction;

/** The spending families as the reference files name them. */
final class ReferenceFamily {

    private ReferenceFamily() {}

    static SpendingFunction of(Row row) {
        return of(row.text("family"), row, "parameter");
    }

    static SpendingFunction of(String family, Row row, String parameter) {
        return switch (family) {
            case "OBF" -> SpendingFunction.obrienFlemingType();
            case "POCOCK" -> SpendingFunction.pocockType();
            case "HSD" -> SpendingFunction.hwangShihDecani(row.number(parameter));
            case "KDM" -> SpendingFunction.kimDemets(row.number(parameter));
            default -> throw new IllegalArgumentException("family: " + family);
        };
    }

    static boolean twoSided(Row row) {
        return row.text("side").equals("two");
    }

    /** The level of one tail. */
    static double tailLevel(Row row) {
        return row.number("alpha") / (twoSided(row) ? 2 : 1);
    }
}
