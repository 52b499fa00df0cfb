package io.tallyward.engine.count;

import java.io.DataOutput;
import java.io.IOException;
import java.lang.invoke.MethodHandles;
import java.lang.invoke.VarHandle;
import java.nio.ByteOrder;

/**
 * Units whose trial can no longer change, in 21 bytes each: the hash and, in five bytes, first exposure, variant and success.
 * Not thread-safe.
 */
final class SealedUnits {

    private static final int PAYLOAD = 5;
    private static final int VARIANT_BITS = 4;

    private static final VarHandle INTS = MethodHandles.byteArrayViewVarHandle(int[].class, ByteOrder.BIG_ENDIAN);

    private final long runFrom;
    private final HashedRows rows = new HashedRows(PAYLOAD);

    private long found;

    /** @param runFrom start of the run; first exposures lie within 2^35 milliseconds of it, a little more than a year */
    SealedUnits(long runFrom) {
        this.runFrom = runFrom;
    }

    int size() {
        return rows.size();
    }

    /** Looks a unit up; what follows is about it. */
    boolean find(long high, long low) {
        if (!rows.find(high, low)) {
            return false;
        }
        byte[] bytes = rows.bytes();
        int at = rows.payload();
        found = (long) (int) INTS.get(bytes, at) << Byte.SIZE | bytes[at + Integer.BYTES] & 0xff;
        return true;
    }

    /** Event time of the first exposure of the unit last found. */
    long first() {
        return runFrom + (found >>> (VARIANT_BITS + 1) & (1L << 35) - 1);
    }

    /** Position of its variant in the plan. */
    int variant() {
        return (int) (found >>> 1) & (1 << VARIANT_BITS) - 1;
    }

    /** Whether a click came in time. */
    boolean success() {
        return (found & 1) != 0;
    }

    /** First half of the hash of the unit last found or added. */
    long high() {
        return rows.high();
    }

    /** Second half of it. */
    long low() {
        return rows.low();
    }

    /** Adds a unit, or replaces it by itself. */
    void add(long high, long low, int variant, long first, boolean success) {
        if (!rows.find(high, low)) {
            rows.insert(high, low);
        }
        long packed = pack(variant, first, success);
        INTS.set(rows.bytes(), rows.payload(), (int) (packed >>> Byte.SIZE));
        rows.bytes()[rows.payload() + Integer.BYTES] = (byte) packed;
    }

    private long pack(int variant, long first, boolean success) {
        return (first - runFrom) << (VARIANT_BITS + 1) | (long) variant << 1 | (success ? 1 : 0);
    }

    /** The durable form of a unit: its row. */
    void write(DataOutput out, long high, long low, int variant, long first, boolean success) throws IOException {
        out.writeLong(high);
        out.writeLong(low);
        long packed = pack(variant, first, success);
        out.writeInt((int) (packed >>> Byte.SIZE));
        out.writeByte((int) packed);
    }

    /** Adds a unit from its durable form. */
    void read(ChunkReader in) {
        long high = in.readLong();
        long low = in.readLong();
        long packed = (long) in.readInt() << Byte.SIZE | in.readByte() & 0xff;
        found = packed;
        add(high, low, variant(), first(), success());
    }
}
