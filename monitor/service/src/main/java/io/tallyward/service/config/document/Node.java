package io.tallyward.service.config.document;

import java.util.List;
import java.util.Map;

/** A value in a file, with the line it stands on; the value of a key stands on the line of its key. */
public sealed interface Node {

    /** Line in the file, from 1; 0 for a value that stands in no file. */
    int line();

    /** What to call the value in a message: the text of a scalar, shortened; the kind of anything else. */
    String describe();

    /** Text, a number, true or false: the reader of a key decides which of them it wants. */
    record Scalar(int line, String text) implements Node {

        private static final int SHOWN = 80;

        @Override
        public String describe() {
            String shown = text.length() > SHOWN ? text.substring(0, SHOWN) + "..." : text;
            return shown.isEmpty() ? "empty text" : shown.replaceAll("\\p{Cntrl}", "?");
        }
    }

    /** A key without a value. */
    record Nothing(int line) implements Node {
        @Override
        public String describe() {
            return "nothing";
        }
    }

    /** Values in order. */
    record Sequence(int line, List<Node> items) implements Node {
        public Sequence {
            items = List.copyOf(items);
        }

        @Override
        public String describe() {
            return "a list";
        }
    }

    /** Values by key, in the order of the file. */
    record Mapping(int line, Map<String, Node> entries) implements Node {

        static final Mapping EMPTY = new Mapping(0, Map.of());

        @Override
        public String describe() {
            return "a mapping";
        }
    }
}
