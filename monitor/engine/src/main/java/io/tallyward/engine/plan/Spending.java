package io.tallyward.engine.plan;

import java.util.Collections;
import java.util.Locale;
import java.util.SortedMap;
import java.util.TreeMap;
import java.util.stream.Collectors;

/**
 * A named error-spending function.
 *
 * @param family the family
 * @param parameter its parameter (gamma or rho); 0 for families that have none
 * @param points for a table: share of the level spent by each fraction, both in (0, 1], the last point 1 and 1; else empty
 */
public record Spending(Family family, double parameter, SortedMap<Double, Double> points) {

    public Spending {
        points = Collections.unmodifiableSortedMap(new TreeMap<>(points));
        if (!(family.parametric() || parameter == 0)) {
            throw new IllegalArgumentException(
                    "parameter: " + parameter + " (expected: 0, as " + family.code() + " has none)");
        }
        if (!(family == Family.TABLE || points.isEmpty())) {
            throw new IllegalArgumentException(
                    "points: " + points.size() + " (expected: none, as " + family.code() + " has none)");
        }
    }

    /** A function of a family that may have a parameter. */
    public Spending(Family family, double parameter) {
        this(family, parameter, new TreeMap<>());
    }

    /** The families a plan may name. */
    public enum Family {
        OBRIEN_FLEMING(false),
        POCOCK(false),
        HWANG_SHIH_DECANI(true),
        KIM_DEMETS(true),
        TABLE(false);

        private final boolean parametric;

        Family(boolean parametric) {
            this.parametric = parametric;
        }

        /** Whether the family needs a parameter. */
        public boolean parametric() {
            return parametric;
        }

        /** The name used in plans and records, as in {@code obrien-fleming}. */
        public String code() {
            return name().toLowerCase(Locale.ROOT).replace('_', '-');
        }
    }

    public static Spending of(Family family) {
        return new Spending(family, 0);
    }

    /** The owner's own function, point by point. */
    public static Spending table(SortedMap<Double, Double> points) {
        return new Spending(Family.TABLE, 0, points);
    }

    /** The name used in records: the family, with its parameter or points in brackets where it has any. */
    public String code() {
        if (family == Family.TABLE) {
            return points.entrySet().stream()
                    .map(point -> point.getKey() + ":" + point.getValue())
                    .collect(Collectors.joining(" ", family.code() + "(", ")"));
        }
        return family.parametric() ? family.code() + "(" + parameter + ")" : family.code();
    }
}
