package io.tallyward.statistics.ratio;

import java.util.Objects;

/**
 * The units of a variant and of the control during one period of constant allocation.
 *
 * @param variant sums over the variant's units
 * @param control sums over the control's units
 */
public record RatioStratum(UnitSums variant, UnitSums control) {

    public RatioStratum {
        Objects.requireNonNull(variant, "variant");
        Objects.requireNonNull(control, "control");
    }
}
