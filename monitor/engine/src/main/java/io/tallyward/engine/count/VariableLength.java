package io.tallyward.engine.count;

import java.io.DataOutput;
import java.io.IOException;

/** Whole numbers that are usually small, seven bits to the byte, the lowest first (LEB128). */
final class VariableLength {

    private static final int SEVEN = 0x7f;

    private VariableLength() {}

    /** @param value 0 or more */
    static void write(DataOutput out, int value) throws IOException {
        int rest = value;
        while (rest > SEVEN) {
            out.writeByte(rest | SEVEN + 1);
            rest >>>= 7;
        }
        out.writeByte(rest);
    }

    static int read(ChunkReader in) {
        int value = 0;
        for (int shift = 0; ; shift += 7) {
            int part = in.readByte();
            value |= (part & SEVEN) << shift;
            if (part >= 0) {
                return value;
            }
        }
    }
}
