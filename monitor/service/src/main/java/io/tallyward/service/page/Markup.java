package io.tallyward.service.page;

import java.util.ArrayDeque;
import java.util.Deque;
import org.owasp.encoder.Encode;

/**
 * Builds HTML, and the SVG inside it, from elements. Every text and every attribute value is escaped on its way in; names
 * of elements and attributes are the program's own. Not thread-safe.
 */
final class Markup {

    private final StringBuilder html = new StringBuilder(16_384);
    private final Deque<String> open = new ArrayDeque<>();

    /** Opens an element; attributes are pairs of name and value, and a null value leaves its attribute out. */
    Markup open(String element, String... attributes) {
        start(element, attributes);
        html.append('>');
        open.push(element);
        return this;
    }

    /** Closes the element opened last. */
    Markup close() {
        html.append("</").append(open.pop()).append('>');
        return this;
    }

    /** An element with nothing in it. */
    Markup empty(String element, String... attributes) {
        start(element, attributes);
        html.append("/>");
        return this;
    }

    /** An element with text in it. */
    Markup leaf(String element, String text, String... attributes) {
        return open(element, attributes).text(text).close();
    }

    Markup text(String text) {
        html.append(Encode.forHtmlContent(text));
        return this;
    }

    /** The document, complete with its type. */
    String document() {
        if (!open.isEmpty()) {
            throw new IllegalStateException("open elements: " + open + " (expected: none)");
        }
        return "<!DOCTYPE html>\n" + html + "\n";
    }

    private void start(String element, String... attributes) {
        if (attributes.length % 2 != 0) {
            throw new IllegalArgumentException(
                    element + ": " + attributes.length + " attribute parts (expected: pairs)");
        }
        html.append('<').append(element);
        for (int i = 0; i < attributes.length; i += 2) {
            if (attributes[i + 1] != null) {
                html.append(' ')
                        .append(attributes[i])
                        .append("=\"")
                        .append(Encode.forHtmlAttribute(attributes[i + 1]))
                        .append('"');
            }
        }
    }
}
