package io.tallyward.connector.format;

import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/**
 * JSON Pointers (RFC 6901) folded into one tree, so that a document is read in a single pass however many pointers there
 * are and however deep they go. A node either leads on or is the place of one or more fields, never both.
 */
final class PointerTree {

    private static final int MAX_DEPTH = 16;

    private final Map<String, PointerTree> children = new HashMap<>();
    private final List<EventField> fields = new ArrayList<>();

    private PointerTree() {}

    /** The tree of pointers in which {@link #problem} and {@link #overlaps} find no fault. */
    static PointerTree of(Map<EventField, String> pointers) {
        PointerTree root = new PointerTree();
        pointers.forEach((field, pointer) -> {
            PointerTree node = root;
            for (String token : tokens(pointer)) {
                node = node.children.computeIfAbsent(token, name -> new PointerTree());
            }
            node.fields.add(field);
        });
        return root;
    }

    /** The node of a member or element, null when no pointer leads there. */
    PointerTree child(String name) {
        return children.get(name);
    }

    /** The fields whose value is here; empty when the pointers lead on. */
    List<EventField> fields() {
        return fields;
    }

    /** What is wrong with one pointer, in words. */
    static Optional<String> problem(String pointer) {
        if (!pointer.startsWith("/")) {
            return Optional.of(Quoted.of(pointer) + " (expected: a JSON Pointer, which starts with /)");
        }
        for (int i = pointer.indexOf('~'); i >= 0; i = pointer.indexOf('~', i + 1)) {
            char next = i + 1 < pointer.length() ? pointer.charAt(i + 1) : ' ';
            if (next != '0' && next != '1') {
                return Optional.of(Quoted.of(pointer) + " (expected: ~ only as ~0 or ~1)");
            }
        }
        int depth = tokens(pointer).length;
        if (depth > MAX_DEPTH) {
            return Optional.of(Quoted.of(pointer) + " (expected: at most " + MAX_DEPTH + " levels)");
        }
        return Optional.empty();
    }

    /** Pairs of fields of which one lies inside the other, in words. */
    static List<String> overlaps(Map<EventField, String> pointers) {
        List<String> problems = new ArrayList<>();
        pointers.forEach((inner, pointer) -> pointers.forEach((outer, prefix) -> {
            if (pointer.startsWith(prefix + "/")) {
                problems.add(inner.code() + ": " + Quoted.of(pointer) + " (expected: not inside " + outer.code()
                        + " at " + Quoted.of(prefix) + ")");
            }
        }));
        return problems;
    }

    private static String[] tokens(String pointer) {
        String[] tokens = pointer.substring(1).split("/", -1);
        for (int i = 0; i < tokens.length; i++) {
            tokens[i] = tokens[i].replace("~1", "/").replace("~0", "~");
        }
        return tokens;
    }
}
