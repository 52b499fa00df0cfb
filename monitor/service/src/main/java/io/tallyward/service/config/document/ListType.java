package io.tallyward.service.config.document;

import io.tallyward.service.config.document.Node.Sequence;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;

/**
 * The type of a list of values of one type.
 *
 * @param item type of each item
 * @param min least number of items
 * @param max largest number of items
 * @param noun what the items are, in the plural
 */
public record ListType<T>(ValueType<T> item, int min, int max, String noun) implements ValueType<List<T>> {

    @Override
    public Optional<List<T>> read(Node node, Place place) {
        if (!(node instanceof Sequence sequence)) {
            place.refuse(node, expected());
            return Optional.empty();
        }
        int size = sequence.items().size();
        if (!(size >= min && size <= max)) {
            place.refuse(node, "a list of " + size, expected());
            return Optional.empty();
        }
        List<T> values = new ArrayList<>();
        for (int i = 0; i < size; i++) {
            item.read(sequence.items().get(i), place.item(i)).ifPresent(values::add);
        }
        return values.size() == size ? Optional.of(List.copyOf(values)) : Optional.empty();
    }

    @Override
    public String expected() {
        return "a list of " + min + " to " + max + " " + noun;
    }

    @Override
    public Form form() {
        return new Form.Items(item.form(), min, max);
    }
}
