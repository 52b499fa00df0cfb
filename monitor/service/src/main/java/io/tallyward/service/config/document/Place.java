package io.tallyward.service.config.document;

import java.util.List;

/**
 * Where a value is being read: its path from the top of the file, and where to say what is wrong with it.
 *
 * @param path as in {@code epochs[1].shares.wide}; empty at the top
 * @param root the shape of the whole file, which knows where a misplaced key belongs
 * @param problems what is wrong so far
 */
public record Place(String path, Shape root, Problems problems) {

    /** The place of a key in the mapping here. */
    public Place key(String key) {
        return new Place(join(path, key), root, problems);
    }

    /** The place of an item in the list here. */
    public Place item(int index) {
        return new Place(path + "[" + index + "]", root, problems);
    }

    /** Refuses the value here. */
    public void refuse(Node node, String expected) {
        problems.add(node.line(), path, node.describe(), expected);
    }

    /** Refuses the value here, naming it otherwise than by its text. */
    public void refuse(Node node, String found, String expected) {
        problems.add(node.line(), path, found, expected);
    }

    /** Refuses the value here and names the accepted one that was probably meant. */
    public void refuse(Node node, String expected, List<String> choices) {
        String remedy = node instanceof Node.Scalar scalar
                ? Suggestion.among(scalar.text(), choices)
                        .map(near -> "Did you mean " + near + "?")
                        .orElse("")
                : "";
        problems.add(node.line(), path, node.describe(), expected, remedy);
    }

    static String join(String path, String key) {
        return path.isEmpty() ? key : path + "." + key;
    }
}
