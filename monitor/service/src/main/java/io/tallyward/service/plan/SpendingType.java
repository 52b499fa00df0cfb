package io.tallyward.service.plan;

import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Spending.Family;
import io.tallyward.service.config.document.Form;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.MapType;
import io.tallyward.service.config.document.Node;
import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Node.Scalar;
import io.tallyward.service.config.document.Place;
import io.tallyward.service.config.document.Range;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.config.document.Shape;
import io.tallyward.service.config.document.ValueType;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.SortedMap;
import java.util.TreeMap;

/** The type of a spending function: the name of a family, or a mapping of a family to its parameter or points. */
final class SpendingType implements ValueType<Spending> {

    /** Range of gamma (Hwang, Shih and DeCani 1990); practice stays within -10 and 4, beyond it boundaries degenerate. */
    private static final ScalarType<Double> GAMMA = ScalarType.number("number from -20 to 20", Range.closed(-20, 20));

    /** Range of rho (Kim and DeMets 1987), the power of the information fraction. */
    private static final ScalarType<Double> RHO = ScalarType.number("number above 0, at most 20", Range.above(0, 20));

    private static final int MOST_POINTS = 100;

    private static final ScalarType<Double> SHARE = ScalarType.number("number from 0 to 1", Range.closed(0, 1));

    /** Share of the level by fraction of the spending clock. */
    private static final MapType<Double> POINTS = new MapType<>(
            new ScalarType<>(
                    "a fraction above 0, at most 1",
                    text -> ScalarType.share().parse().apply(text).map(String::valueOf),
                    new Form.Text("0*\\.\\d*[1-9]\\d*|0*1(\\.0*)?", Integer.MAX_VALUE)),
            SHARE,
            1,
            MOST_POINTS,
            "points");

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
            if (entry.getKey().equals(Family.TABLE.code())) {
                return table(entry.getValue(), place.key(entry.getKey()));
            }
            Optional<Family> family = family(entry.getKey()).filter(Family::parametric);
            if (family.isPresent()) {
                return parameter(family.get())
                        .read(entry.getValue(), place.key(entry.getKey()))
                        .map(value -> new Spending(family.get(), value));
            }
        }
        place.refuse(
                node,
                expected(),
                Arrays.stream(Family.values())
                        .filter(family -> !family.parametric() && family != Family.TABLE)
                        .map(Family::code)
                        .toList());
        return Optional.empty();
    }

    @Override
    public String expected() {
        return "obrien-fleming, pocock, {hwang-shih-decani: GAMMA}, {kim-demets: RHO} "
                + "or {table: {FRACTION: SHARE, ..., 1: 1}}";
    }

    @Override
    public Form form() {
        List<Form> forms = new ArrayList<>();
        List<String> names = new ArrayList<>();
        for (Family family : Family.values()) {
            if (family == Family.TABLE) {
                forms.add(new Form.Keys(Shape.of(
                        Key.required(family.code(), POINTS, "Share of the level by fraction of the spending clock."))));
            } else if (family.parametric()) {
                forms.add(new Form.Keys(
                        Shape.of(Key.required(family.code(), parameter(family), "The parameter of the family."))));
            } else {
                names.add(family.code());
            }
        }
        forms.add(0, new Form.Choice(names));
        return new Form.Either(forms);
    }

    private static Optional<Spending> table(Node node, Place place) {
        Optional<Map<String, Double>> written = POINTS.read(node, place);
        if (written.filter(points -> !points.isEmpty()).isEmpty()) {
            return Optional.empty();
        }
        SortedMap<Double, Double> points = new TreeMap<>();
        written.get().forEach((fraction, share) -> points.put(Double.valueOf(fraction), share));
        boolean risesToOne = points.lastKey() == 1 && points.get(1.0) == 1;
        double last = 0;
        for (double share : points.values()) {
            risesToOne &= share >= last;
            last = share;
        }
        if (!risesToOne) {
            place.refuse(node, "shares " + points.values(), "shares of the level that never fall, the last point 1: 1");
            return Optional.empty();
        }
        return Optional.of(Spending.table(points));
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
