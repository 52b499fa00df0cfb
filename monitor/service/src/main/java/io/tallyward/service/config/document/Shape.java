package io.tallyward.service.config.document;

import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Node.Nothing;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/**
 * Which keys a mapping may have. Keys beyond these are refused.
 *
 * @param keys in the order to document them
 * @param alternatives keys of which exactly one is written, for schemas; the rule itself is checked, with better words, by
 *     whoever knows what the keys mean
 */
public record Shape(List<Key<?>> keys, List<Key<?>> alternatives) implements ValueType<Values> {

    public Shape {
        keys = List.copyOf(keys);
        alternatives = List.copyOf(alternatives);
    }

    public Shape(List<Key<?>> keys) {
        this(keys, List.of());
    }

    public static Shape of(Key<?>... keys) {
        return new Shape(List.of(keys));
    }

    /** The same shape, in which exactly one of some keys is written. */
    public Shape withOneOf(Key<?>... oneOf) {
        return new Shape(keys, List.of(oneOf));
    }

    /** Reads a whole file of this shape. */
    public Values readRoot(Mapping mapping, Problems problems) {
        return readMapping(mapping, new Place("", this, problems));
    }

    @Override
    public Optional<Values> read(Node node, Place place) {
        if (node instanceof Nothing) {
            return Optional.of(readMapping(new Mapping(node.line(), Map.of()), place));
        }
        if (node instanceof Mapping mapping) {
            return Optional.of(readMapping(mapping, place));
        }
        place.refuse(node, expected());
        return Optional.empty();
    }

    @Override
    public String expected() {
        return "a mapping with " + names();
    }

    @Override
    public Form form() {
        return new Form.Keys(this);
    }

    private Values readMapping(Mapping mapping, Place place) {
        refuseUnknown(mapping, place);
        Values values = new Values(mapping.line(), place);
        for (Key<?> key : keys) {
            readKey(key, mapping, place.key(key.name()), values);
        }
        return values;
    }

    private static void readKey(Key<?> key, Mapping mapping, Place here, Values values) {
        Node node = mapping.entries().get(key.name());
        if (node == null && key.required()) {
            here.problems()
                    .add(mapping.line(), here.path(), "missing", key.type().expected());
            return;
        }
        if (node != null) {
            values.written(key, node.line());
        }
        Optional<Node> present = Optional.ofNullable(node).or(key::fallback);
        present.flatMap(value -> key.type().read(value, here)).ifPresent(value -> values.put(key, value));
    }

    private void refuseUnknown(Mapping mapping, Place place) {
        for (Map.Entry<String, Node> entry : mapping.entries().entrySet()) {
            if (keys.stream().noneMatch(key -> key.name().equals(entry.getKey()))) {
                String path = place.key(entry.getKey()).path();
                String remedy = Suggestion.forKey(entry.getKey(), this, place)
                        .map(known -> "Did you mean " + known + "?")
                        .orElse("");
                place.problems().add(entry.getValue().line(), path, "unknown key", names(), remedy);
            }
        }
    }

    private String names() {
        return String.join(", ", keys.stream().map(Key::name).toList());
    }
}
