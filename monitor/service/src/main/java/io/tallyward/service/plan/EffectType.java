package io.tallyward.service.plan;

import io.tallyward.service.config.document.Form;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.Node;
import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Place;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.config.document.Shape;
import io.tallyward.service.config.document.ValueType;
import java.util.List;
import java.util.Optional;
import java.util.Set;

/** The type of a size of effect: a difference of rates, or a share of the baseline. */
final class EffectType implements ValueType<EffectType.Effect> {

    private static final String RELATIVE = "relative";
    private static final ScalarType<Double> DIFFERENCE = ScalarType.numberBetween(0, 1);
    private static final ScalarType<Double> SHARE = ScalarType.numberBetween(0, 1000);

    /**
     * A size of effect.
     *
     * @param value as written
     * @param relative whether it is a share of the baseline
     */
    record Effect(double value, boolean relative) {

        /** The difference of rates. */
        double difference(double baseline) {
            return relative ? value * baseline : value;
        }

        @Override
        public String toString() {
            return relative ? "{relative: " + value + "}" : String.valueOf(value);
        }
    }

    @Override
    public Optional<Effect> read(Node node, Place place) {
        if (node instanceof Mapping mapping && mapping.entries().keySet().equals(Set.of(RELATIVE))) {
            return SHARE.read(mapping.entries().get(RELATIVE), place.key(RELATIVE))
                    .map(value -> new Effect(value, true));
        }
        if (node instanceof Node.Scalar scalar) {
            Optional<Double> value = DIFFERENCE.parse().apply(scalar.text());
            if (value.isPresent()) {
                return value.map(found -> new Effect(found, false));
            }
        }
        place.refuse(node, expected());
        return Optional.empty();
    }

    @Override
    public String expected() {
        return DIFFERENCE.expected() + ", or {relative: SHARE} of the baseline";
    }

    @Override
    public Form form() {
        return new Form.Either(List.of(
                DIFFERENCE.form(),
                new Form.Keys(Shape.of(Key.required(RELATIVE, SHARE, "Share of the baseline, as 0.05 for 5 %.")))));
    }
}
