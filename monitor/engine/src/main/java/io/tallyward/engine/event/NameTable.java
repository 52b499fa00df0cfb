package io.tallyward.engine.event;

import java.util.Collection;

/**
 * A fixed list of names, found by their characters where there is no {@code String} of them: open addressing under the hash
 * that strings have. Immutable; may be shared.
 */
public final class NameTable {

    /** Slots per name at least; short probes matter more than a few bytes. */
    private static final int ROOM = 4;

    /** 2^32 over the golden ratio (Knuth, The Art of Computer Programming 3, section 6.4; recalled). */
    private static final int SCATTER = 0x9e37_79b9;

    private final String[] names;
    private final int[] indices;
    private final int shift;
    private final int size;

    /** @param names different names; each is found by its position here */
    public NameTable(Collection<String> names) {
        int slots = Integer.highestOneBit(Math.max(1, names.size()) * ROOM);
        shift = Integer.SIZE - Integer.numberOfTrailingZeros(slots);
        this.names = new String[slots];
        indices = new int[slots];
        int index = 0;
        for (String name : names) {
            int slot = slotOf(name.hashCode());
            while (this.names[slot] != null) {
                if (this.names[slot].equals(name)) {
                    throw new IllegalArgumentException("names: " + name + " twice (expected: different names)");
                }
                slot = slot + 1 & slots - 1;
            }
            this.names[slot] = name;
            indices[slot] = index++;
        }
        size = index;
    }

    /** How many names there are. */
    public int size() {
        return size;
    }

    /** Position of the name that some characters spell, or -1 when there is none. */
    public int find(char[] text, int from, int length) {
        int hash = 0;
        for (int i = from; i < from + length; i++) {
            hash = 31 * hash + text[i];
        }
        int slot = slotOf(hash);
        while (names[slot] != null) {
            if (spells(text, from, length, names[slot])) {
                return indices[slot];
            }
            slot = slot + 1 & names.length - 1;
        }
        return -1;
    }

    /** Position of a name, or -1 when it is not in the list. */
    public int find(String name) {
        int slot = slotOf(name.hashCode());
        while (names[slot] != null) {
            if (names[slot].equals(name)) {
                return indices[slot];
            }
            slot = slot + 1 & names.length - 1;
        }
        return -1;
    }

    /** Names that differ in a number at their end have hashes side by side; this scatters them (Knuth's multiplier). */
    private int slotOf(int hash) {
        return hash * SCATTER >>> shift;
    }

    private static boolean spells(char[] text, int from, int length, String name) {
        if (name.length() != length) {
            return false;
        }
        for (int i = 0; i < length; i++) {
            if (text[from + i] != name.charAt(i)) {
                return false;
            }
        }
        return true;
    }
}
