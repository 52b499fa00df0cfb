package io.tallyward.service.config.document;

import java.util.HashMap;
import java.util.Map;
import java.util.Optional;

/**
 * The values of one mapping by key. While there are problems some are absent; once a file is free of them every required
 * key and every key with a default has its value. Rules that concern several keys are checked on it, and what breaks them
 * is refused here, so that it is reported with its own path and line.
 */
public final class Values {

    private final int line;
    private final Place place;
    private final Map<Key<?>, Object> values = new HashMap<>();
    private final Map<Key<?>, Integer> lines = new HashMap<>();

    Values(int line, Place place) {
        this.line = line;
        this.place = place;
    }

    void put(Key<?> key, Object value) {
        values.put(key, value);
    }

    void written(Key<?> key, int keyLine) {
        lines.put(key, keyLine);
    }

    /** Whether the file gives the key, be its value refused or not. */
    public boolean gives(Key<?> key) {
        return lines.containsKey(key);
    }

    /** The value of a key; empty when it is absent or was refused. */
    @SuppressWarnings("unchecked")
    public <T> Optional<T> find(Key<T> key) {
        return Optional.ofNullable((T) values.get(key));
    }

    /** The value of a key that is known to have one. */
    public <T> T get(Key<T> key) {
        return find(key).orElseThrow(() -> new IllegalStateException(key.name() + ": read before it was checked"));
    }

    /** Refuses the value of a key. */
    public void refuse(Key<?> key, String found, String expected) {
        refuse(key, found, expected, "");
    }

    /** Refuses the value of a key and says what to do. */
    public void refuse(Key<?> key, String found, String expected, String remedy) {
        int at = lines.getOrDefault(key, line);
        place.problems().add(at, place.key(key.name()).path(), found, expected, remedy);
    }

    /** Refuses the mapping as a whole. */
    public void refuse(String found, String expected) {
        place.problems().add(line, place.path(), found, expected);
    }
}
