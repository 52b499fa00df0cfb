package io.tallyward.service.config.document;

import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Node.Nothing;
import java.util.Collections;
import java.util.LinkedHashMap;
import java.util.Map;
import java.util.Optional;

/**
 * The type of a mapping whose keys are the user's own names. The order of the file is kept.
 *
 * @param name type of the keys
 * @param value type of the values
 * @param min least number of entries
 * @param max largest number of entries
 * @param noun what the entries are, in the plural
 */
public record MapType<T>(ScalarType<String> name, ValueType<T> value, int min, int max, String noun)
        implements ValueType<Map<String, T>> {

    @Override
    public Optional<Map<String, T>> read(Node node, Place place) {
        Map<String, Node> entries = node instanceof Mapping mapping ? mapping.entries() : Map.of();
        if (!(node instanceof Mapping || node instanceof Nothing)) {
            place.refuse(node, expected());
            return Optional.empty();
        }
        if (!(entries.size() >= min && entries.size() <= max)) {
            place.refuse(node, entries.isEmpty() ? "no " + noun : entries.size() + " " + noun, expected());
        }
        int before = place.problems().size();
        Map<String, T> values = new LinkedHashMap<>();
        entries.forEach((key, entry) -> {
            Place here = place.key(key);
            Optional<String> written = name.read(new Node.Scalar(entry.line(), key), here);
            Optional<T> read = value.read(entry, here);
            written.ifPresent(text -> read.ifPresent(item -> values.put(text, item)));
        });
        boolean whole = place.problems().size() == before;
        return whole ? Optional.of(Collections.unmodifiableMap(values)) : Optional.empty();
    }

    @Override
    public String expected() {
        return "a mapping of " + min + " to " + max + " " + noun;
    }

    @Override
    public Form form() {
        return new Form.Entries(name.form(), value.form(), min, max);
    }
}
