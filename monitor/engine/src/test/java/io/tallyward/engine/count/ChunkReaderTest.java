package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.shard.Packing;
import java.util.Random;
import org.junit.jupiter.api.Test;

class ChunkReaderTest {

    private static final long SEED = 7;

    @Test
    void readsWhatADataOutputHasWritten() {
        Random random = new Random(SEED);
        long[] longs = random.longs(100).toArray();
        byte[] bytes = Packing.pack(out -> {
            for (long number : longs) {
                out.writeLong(number);
                out.writeInt((int) number);
                out.writeByte((int) number);
                VariableLength.write(out, (int) (number >>> 33));
            }
        });
        ChunkReader reader = new ChunkReader(bytes);
        for (long number : longs) {
            assertTrue(reader.hasMore());
            assertEquals(number, reader.readLong(), "seed " + SEED);
            assertEquals((int) number, reader.readInt(), "seed " + SEED);
            assertEquals((byte) number, reader.readByte(), "seed " + SEED);
            assertEquals((int) (number >>> 33), VariableLength.read(reader), "seed " + SEED);
        }
        assertFalse(reader.hasMore());
    }

    @Test
    void saysThatAnEntryIsCutShort() {
        ChunkReader reader = new ChunkReader(new byte[7]);
        IllegalStateException cut = assertThrows(IllegalStateException.class, reader::readLong);
        assertEquals("stored counts: an entry is cut short", cut.getMessage());
        assertEquals(0, reader.readInt());
        assertThrows(IllegalStateException.class, reader::readInt);
    }
}
