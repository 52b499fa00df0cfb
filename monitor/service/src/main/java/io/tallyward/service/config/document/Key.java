package io.tallyward.service.config.document;

import java.util.List;
import java.util.Optional;

/**
 * One key of a mapping: the single place of its name, type, default and meaning.
 *
 * @param name as written in the file
 * @param type how its value is read
 * @param required whether its absence is a problem
 * @param fallback what its absence means; empty for required keys and for those that may simply be absent
 * @param doc what it means, in one line
 */
public record Key<T>(String name, ValueType<T> type, boolean required, Optional<Node> fallback, String doc) {

    public static <T> Key<T> required(String name, ValueType<T> type, String doc) {
        return new Key<>(name, type, true, Optional.empty(), doc);
    }

    public static <T> Key<T> optional(String name, ValueType<T> type, String doc) {
        return new Key<>(name, type, false, Optional.empty(), doc);
    }

    /** A key with a default, written as it would be in the file. */
    public static <T> Key<T> withDefault(String name, ValueType<T> type, String fallback, String doc) {
        return new Key<>(name, type, false, Optional.of(new Node.Scalar(0, fallback)), doc);
    }

    /** A list with a default of one item. */
    public static <T> Key<T> withDefaultItem(String name, ValueType<T> type, String item, String doc) {
        Node fallback = new Node.Sequence(0, List.of(new Node.Scalar(0, item)));
        return new Key<>(name, type, false, Optional.of(fallback), doc);
    }

    /** A section that may be left out: its keys then have their own defaults. */
    public static Key<Values> section(String name, Shape shape, String doc) {
        return new Key<>(name, shape, false, Optional.of(Node.Mapping.EMPTY), doc);
    }
}
