package io.tallyward.connector.format;

/** Foreign text made safe to show: quoted, escaped to printable ASCII, and short. */
public final class Quoted {

    static final int MAX_DETAIL = 400;

    private static final int MAX_SHOWN = 40;

    private Quoted() {}

    /** A value of unknown origin, cut to {@value #MAX_SHOWN} characters before escaping. */
    public static String of(String value) {
        boolean cut = value.length() > MAX_SHOWN;
        return '"' + ascii(cut ? value.substring(0, MAX_SHOWN) : value) + (cut ? "...\"" : "\"");
    }

    /** A whole sentence that may carry foreign text: printable ASCII, at most {@value #MAX_DETAIL} characters. */
    static String sentence(String text) {
        StringBuilder safe = new StringBuilder(text.length());
        for (int i = 0; i < text.length() && safe.length() <= MAX_DETAIL; i++) {
            appendPrintable(safe, text.charAt(i));
        }
        return safe.length() > MAX_DETAIL ? safe.substring(0, MAX_DETAIL - 3) + "..." : safe.toString();
    }

    private static String ascii(String text) {
        StringBuilder safe = new StringBuilder(text.length() + 8);
        for (int i = 0; i < text.length(); i++) {
            char c = text.charAt(i);
            if (c == '"' || c == '\\') {
                safe.append('\\');
            }
            appendPrintable(safe, c);
        }
        return safe.toString();
    }

    private static void appendPrintable(StringBuilder safe, char c) {
        if (c >= ' ' && c <= '~') {
            safe.append(c);
        } else {
            safe.append(String.format("\\u%04x", (int) c));
        }
    }
}
