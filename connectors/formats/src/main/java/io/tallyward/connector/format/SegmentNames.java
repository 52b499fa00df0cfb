package io.tallyward.connector.format;

/** The names of the segments of one document: few, short, and each but once. Not thread-safe. */
final class SegmentNames {

    private static final int ASCII_END = 0x80;

    private final String[] names = new String[EventDraft.MAX_SEGMENTS];
    private int size;

    void clear() {
        size = 0;
    }

    /** Adds a name; returns false when it is too long, not ASCII, there already, or one too many. */
    boolean add(String name) {
        if (size == names.length || name.length() > EventDraft.MAX_SEGMENT_TEXT || !isAscii(name)) {
            return false;
        }
        for (int i = 0; i < size; i++) {
            if (names[i].equals(name)) {
                return false;
            }
        }
        names[size++] = name;
        return true;
    }

    private static boolean isAscii(String name) {
        for (int i = 0; i < name.length(); i++) {
            if (name.charAt(i) >= ASCII_END) {
                return false;
            }
        }
        return true;
    }
}
