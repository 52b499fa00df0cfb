package io.tallyward.connector.format;

import io.tallyward.engine.event.EventKind;
import java.util.ArrayList;
import java.util.Collections;
import java.util.EnumMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;

/**
 * Where the fields of an event are in a JSON document, and which values of the kind mean what.
 *
 * @param pointers JSON Pointers (RFC 6901) by field, at most {@value #MAX_POINTER_LENGTH} characters each; an optional
 *     field without a pointer is never read. Several fields may share a pointer, but none may lie inside another's.
 * @param kinds meaning of each value of the kind, at most {@value #MAX_KINDS}; both meanings occur. Values are compared
 *     exactly.
 */
public record EventMapping(Map<EventField, String> pointers, Map<String, EventKind> kinds) {

    /** Every field at the top level of the document under its own code; kinds {@code view} and {@code click}. */
    public static final EventMapping DEFAULT = byCode();

    static final int MAX_POINTER_LENGTH = 256;
    static final int MAX_KINDS = 32;

    /**
     * Checks and copies.
     *
     * @throws IllegalArgumentException naming every problem at once
     */
    public EventMapping {
        List<String> problems = problems(pointers, kinds);
        if (!problems.isEmpty()) {
            throw new IllegalArgumentException(String.join("; ", problems));
        }
        pointers = Collections.unmodifiableMap(new EnumMap<>(pointers));
        kinds = Collections.unmodifiableMap(new TreeMap<>(kinds));
    }

    /** The same with another location of one field. */
    public EventMapping with(EventField field, String pointer) {
        Map<EventField, String> changed = new EnumMap<>(pointers);
        changed.put(field, pointer);
        return new EventMapping(changed, kinds);
    }

    /** The same without one optional field. */
    public EventMapping without(EventField field) {
        Map<EventField, String> changed = new EnumMap<>(pointers);
        changed.remove(field);
        return new EventMapping(changed, kinds);
    }

    /** The same with other meanings of the kind's values. */
    public EventMapping withKinds(Map<String, EventKind> changed) {
        return new EventMapping(pointers, changed);
    }

    /** What keeps two parts from being a mapping, one sentence each as {@code key: found (expected: ...)}; empty if nothing. */
    public static List<String> problems(Map<EventField, String> pointers, Map<String, EventKind> kinds) {
        List<String> problems = new ArrayList<>();
        for (EventField field : EventField.values()) {
            String pointer = pointers.get(field);
            if (pointer == null && field.required()) {
                problems.add(field.code() + ": missing (expected: a JSON Pointer such as /" + field.code() + ")");
            } else if (pointer != null) {
                pointerProblem(pointer).ifPresent(problem -> problems.add(field.code() + ": " + problem));
            }
        }
        if (problems.isEmpty()) {
            problems.addAll(PointerTree.overlaps(pointers));
        }
        problems.addAll(kindProblems(kinds));
        return problems;
    }

    private static Optional<String> pointerProblem(String pointer) {
        if (pointer.length() > MAX_POINTER_LENGTH) {
            return Optional.of(pointer.length() + " characters (expected: at most " + MAX_POINTER_LENGTH + ")");
        }
        return PointerTree.problem(pointer);
    }

    private static List<String> kindProblems(Map<String, EventKind> kinds) {
        List<String> problems = new ArrayList<>();
        if (kinds.size() > MAX_KINDS) {
            problems.add("kinds: " + kinds.size() + " values (expected: at most " + MAX_KINDS + ")");
        }
        for (EventKind meaning : EventKind.values()) {
            if (!kinds.containsValue(meaning)) {
                problems.add("kinds: no value means " + meaning + " (expected: at least one)");
            }
        }
        for (String value : kinds.keySet()) {
            if (value.isEmpty() || value.length() > EventDraft.MAX_TEXT) {
                problems.add("kinds: " + Quoted.of(value) + " (expected: 1 to " + EventDraft.MAX_TEXT + " characters)");
            }
        }
        return problems;
    }

    private static EventMapping byCode() {
        Map<EventField, String> pointers = new EnumMap<>(EventField.class);
        for (EventField field : EventField.values()) {
            pointers.put(field, "/" + field.code());
        }
        return new EventMapping(pointers, Map.of("view", EventKind.VIEW, "click", EventKind.CLICK));
    }
}
