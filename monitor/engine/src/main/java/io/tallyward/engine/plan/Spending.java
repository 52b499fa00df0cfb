package io.tallyward.engine.plan;

import java.util.Locale;

/**
 * A named error-spending function.
 *
 * @param family the family
 * @param parameter its parameter (gamma or rho); 0 for families that have none
 */
public record Spending(Family family, double parameter) {

    /** The families a plan may name. */
    public enum Family {
        OBRIEN_FLEMING(false),
        POCOCK(false),
        HWANG_SHIH_DECANI(true),
        KIM_DEMETS(true);

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

    /** The name used in records: the family, with its parameter in brackets where it has one. */
    public String code() {
        return family.parametric() ? family.code() + "(" + parameter + ")" : family.code();
    }
}
