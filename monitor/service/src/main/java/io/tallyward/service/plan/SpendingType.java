package io.tallyward.service.plan;

import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.service.config.document.Node;
import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Node.Scalar;
import io.tallyward.service.config.document.Place;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.config.document.ValueType;
import java.util.Arrays;
import java.util.Map;
import java.util.Optional;

/** The type of a spending function: the name of a family, or a mapping of a family to its parameter. */
final class SpendingType implements ValueType<Spending> {

    /** Range of gamma (Hwang, Shih and DeCani 1990); practice stays within -10 and 4, beyond it boundaries degenerate. */
    private static final ScalarType<Double> GAMMA =
            ScalarType.number("number from -20 to 20", value -> value >= -20 && value <= 20);

    /** Range of rho (Kim and DeMets 1987), the power of the information fraction. */
    private static final ScalarType<Double> RHO =
            ScalarType.number("number above 0, at most 20", value -> value > 0 && value <= 20);

    @Override
    public Optional<Spending> read(Node node, Place place) {
        if (node instanceof Scalar scalar) {
            Optional<Family> family = family(scalar.text());
            if (family.isPresent() && !family.get().parametric()) {
                return family.map(Spending::of);
            }
        }
        if (node instanceof Mapping mapping && mapping.entries().size() == 1) {
            Map.Entry<String, Node> entry =
                    mapping.entries().entrySet().iterator().next();
            Optional<Family> family = family(entry.getKey()).filter(Family::parametric);
            if (family.isPresent()) {
                return parameter(family.get())
                        .read(entry.getValue(), place.key(entry.getKey()))
                        .map(value -> new Spending(family.get(), value));
            }
        }
        place.refuse(node, expected());
        return Optional.empty();
    }

    @Override
    public String expected() {
        return "obrien-fleming, pocock, {hwang-shih-decani: GAMMA} or {kim-demets: RHO}";
    }

    private static ScalarType<Double> parameter(Family family) {
        return family == Family.HWANG_SHIH_DECANI ? GAMMA : RHO;
    }

    private static Optional<Family> family(String code) {
        return Arrays.stream(Family.values())
                .filter(family -> family.code().equals(code))
                .findFirst();
    }
}
