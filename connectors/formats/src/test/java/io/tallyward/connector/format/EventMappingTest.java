package io.tallyward.connector.format;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.event.EventKind;
import java.util.Map;
import org.junit.jupiter.api.Test;

class EventMappingTest {

    @Test
    void placesEveryFieldUnderItsCodeByDefault() {
        assertEquals(
                "{KIND=/kind, EXPERIMENT=/experiment, VARIANT=/variant, UNIT=/unit, ID=/id, AT=/at, SOURCE=/source,"
                        + " VIEW=/view, SEGMENTS=/segments, RECEIVED=/received}",
                EventMapping.DEFAULT.pointers().toString());
        assertEquals(Map.of("view", EventKind.VIEW, "click", EventKind.CLICK), EventMapping.DEFAULT.kinds());
    }

    @Test
    void namesEveryProblemAtOnce() {
        Map<EventField, String> pointers = Map.of(
                EventField.KIND, "kind",
                EventField.EXPERIMENT, "/a~2",
                EventField.VARIANT, "/" + "v".repeat(256),
                EventField.ID, "",
                EventField.AT, "/a".repeat(17));
        IllegalArgumentException refusal = assertThrows(
                IllegalArgumentException.class, () -> new EventMapping(pointers, Map.of("", EventKind.VIEW)));
        assertEquals(
                String.join(
                        "; ",
                        "kind: \"kind\" (expected: a JSON Pointer, which starts with /)",
                        "experiment: \"/a~2\" (expected: ~ only as ~0 or ~1)",
                        "variant: 257 characters (expected: at most 256)",
                        "unit: missing (expected: a JSON Pointer such as /unit)",
                        "id: \"\" (expected: a JSON Pointer, which starts with /)",
                        "at: \"/a/a/a/a/a/a/a/a/a/a/a/a/a/a/a/a/a\" (expected: at most 16 levels)",
                        "kinds: no value means CLICK (expected: at least one)",
                        "kinds: \"\" (expected: 1 to 256 characters)"),
                refusal.getMessage());
    }

    @Test
    void refusesAFieldInsideAnother() {
        IllegalArgumentException refusal = assertThrows(
                IllegalArgumentException.class,
                () -> EventMapping.DEFAULT.with(EventField.VARIANT, "/segments/variant"));
        assertEquals(
                "variant: \"/segments/variant\" (expected: not inside segments at \"/segments\")",
                refusal.getMessage());
    }

    @Test
    void allowsAPlaceForTwoFieldsAndNoneForOptionalOnes() {
        EventMapping mapping =
                EventMapping.DEFAULT.with(EventField.SOURCE, "/experiment").without(EventField.SEGMENTS);
        assertEquals("/experiment", mapping.pointers().get(EventField.SOURCE));
        assertTrue(mapping.pointers().get(EventField.SEGMENTS) == null);
        assertThrows(IllegalArgumentException.class, () -> EventMapping.DEFAULT.without(EventField.UNIT));
    }
}
