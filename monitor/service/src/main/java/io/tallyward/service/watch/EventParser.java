package io.tallyward.service.watch;

import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.EventSlotReader;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.engine.event.EventSlot;

/** Makes events of records, in two ways: a quick one for what is usual, and one that says what is wrong. */
interface EventParser {

    /** Fills the slot with an event and returns true; false for what has to be looked at more closely. */
    boolean read(byte[] value, EventSlot slot);

    /** The event, or why there is none. */
    Decoded read(byte[] value);

    static EventParser of(JsonEventReader reader, EventSlotReader slotReader) {
        return new Json(reader, slotReader);
    }

    /** Of JSON documents. */
    record Json(JsonEventReader reader, EventSlotReader slotReader) implements EventParser {
        @Override
        public boolean read(byte[] value, EventSlot slot) {
            return slotReader.read(value, slot);
        }

        @Override
        public Decoded read(byte[] value) {
            return reader.read(value);
        }
    }
}
