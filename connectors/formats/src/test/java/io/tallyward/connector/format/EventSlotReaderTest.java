package io.tallyward.connector.format;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertInstanceOf;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.sun.management.ThreadMXBean;
import io.tallyward.connector.format.Decoded.Accepted;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.plan.PlanNames;
import java.lang.management.ManagementFactory;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Collections;
import java.util.List;
import java.util.Map;
import java.util.Random;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class EventSlotReaderTest {

    private static final int MAX_BYTES = 4096;
    private static final PlanNames NAMES = new PlanNames(
            List.of("quay-banner", "deck-map"),
            List.of(List.of("plain", "wide"), List.of("list", "flat", "deep")),
            List.of("b", "platform"));
    private static final String VIEW = "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"wide\","
            + "\"unit\":\"visitor-7\",\"id\":\"e1\",\"at\":\"2026-05-04T06:00:00Z\"}";

    private final JsonEventReader reader = new JsonEventReader(EventMapping.DEFAULT, MAX_BYTES);
    private final EventSlotReader slotReader = new EventSlotReader(EventMapping.DEFAULT, MAX_BYTES, NAMES);
    private final EventSlot slot = new EventSlot();

    @ParameterizedTest
    @ValueSource(
            strings = {
                "",
                ",\"received\":1777874400123",
                ",\"source\":\"web\",\"view\":12,\"segments\":{\"platform\":\"phone\",\"lang\":null}",
                ",\"source\":null,\"view\":\"\",\"segments\":null,\"received\":null",
                ",\"other\":[{\"kind\":\"click\"},[[1e9]]],\"other\":{\"unit\":\"\u26f4\"},\"x\":true"
            })
    void readsWhatAPlainDocumentMayHave(String further) {
        String json = VIEW.substring(0, VIEW.length() - 1) + further + "}";
        assertTrue(slotReader.read(utf8(json), slot), json);
        assertAgrees(utf8(json), "whole");
        assertTrue(slotReader.read(utf8("\t" + json + " \r\n"), slot), "blanks around it");
    }

    @ParameterizedTest
    @ValueSource(
            strings = {
                "",
                " ",
                "{}",
                "[]",
                "{\"kind\":\"view\"}",
                "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"wide\",\"unit\":\"v\",\"id\":\"e\",\"at\":1",
                "{\"kind\":\"view\",\"experiment\":\"other\",\"variant\":\"wide\",\"unit\":\"v\",\"id\":\"e\",\"at\":1}",
                "{\"kind\":\"view\",\"experiment\":\"deck-map\",\"variant\":\"wide\",\"unit\":\"v\",\"id\":\"e\",\"at\":1}",
                "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"wide\",\"unit\":\"\u26f4\",\"id\":\"e\",\"at\":1}",
                "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"wide\",\"unit\":\"v\",\"id\":\"e\",\"at\":1} {}",
                "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"wide\",\"unit\":\"v\",\"id\":\"e\",\"at\":1}tr"
            })
    void leavesTheRestAndReadsOn(String json) {
        assertFalse(slotReader.read(utf8(json), slot), json);
        assertTrue(slotReader.read(utf8(VIEW), slot), "the next document after " + json);
        assertEquals("EventSlot[VIEW, 0/1, 1777874400000]", slot.toString());
    }

    @Test
    void leavesNoValueAndTooLargeOnes() {
        assertFalse(slotReader.read(null, slot));
        assertFalse(slotReader.read(utf8(" ".repeat(MAX_BYTES) + VIEW), slot));
        assertTrue(slotReader.read(utf8(" ".repeat(MAX_BYTES - VIEW.length()) + VIEW), slot));
    }

    @Test
    void agreesWithTheFriendlyReaderWhateverTheDocument() {
        int plain = 0;
        for (int seed = 0; seed < 40_000; seed++) {
            Random random = new Random(seed);
            byte[] json = utf8(document(random));
            if (random.nextInt(3) == 0 && json.length > 0) {
                edit(json, random);
            }
            plain += assertAgrees(json, "seed " + seed) ? 1 : 0;
        }
        assertTrue(plain > 4_000 && plain < 36_000, "both ways are taken: " + plain + " plain of 40000");
    }

    @Test
    void keepsTheSegmentsThatPlansNameAndNoneOfTheDocumentBefore() {
        int platform = NAMES.segments().find("platform");
        int b = NAMES.segments().find("b");
        String json = VIEW.replace("}", ",\"segments\":{\"c\":\"x\",\"platform\":\"app\",\"b\":null}}");
        assertTrue(slotReader.read(utf8(json), slot));
        int place = slot.segment(platform);
        assertEquals("app", new String(slot.segmentText(place), 0, slot.segmentLength(place)));
        assertEquals(-1, slot.segment(b));
        assertTrue(slotReader.read(utf8(VIEW), slot));
        assertEquals(-1, slot.segment(platform));
    }

    @Test
    void agreesWithTheFriendlyReaderThroughAnotherMapping() {
        EventMapping mapping = EventMapping.DEFAULT
                .with(EventField.KIND, "/type")
                .with(EventField.VARIANT, "/data/variant")
                .with(EventField.UNIT, "/data/visitor/id")
                .with(EventField.SOURCE, "/id")
                .withKinds(Map.of("shown", EventKind.VIEW, "pressed", EventKind.CLICK));
        String json = "{\"type\":\"pressed\",\"data\":{\"visitor\":{\"id\":77,\"x\":1},\"variant\":\"deep\"},"
                + "\"experiment\":\"deck-map\",\"id\":\"e9\",\"at\":1777874400123}";
        EventSlotReader mapped = new EventSlotReader(mapping, MAX_BYTES, NAMES);
        assertTrue(mapped.read(utf8(json), slot));
        assertSame(slot, new JsonEventReader(mapping, MAX_BYTES).read(utf8(json)), json);
        assertEquals("EventSlot[CLICK, 1/2, 1777874400123]", slot.toString());
    }

    @Test
    void readsDocumentsThatNeverLookTheSame() {
        Random random = new Random(7);
        List<String> members =
                new ArrayList<>(List.of(VIEW.substring(1, VIEW.length() - 1).split(",")));
        for (int i = 0; i < 1_000; i++) {
            List<String> shown = new ArrayList<>(members);
            shown.add("\"name-" + i + "\":" + i);
            shown.add("\"name-" + random.nextInt(i + 1) + "\":{\"kind\":\"click\",\"unit\":[" + i + "]}");
            shown.add("\"" + "long".repeat(50) + i + "\":\"view\"");
            Collections.shuffle(shown, random);
            byte[] json = utf8("{" + String.join(",", shown) + "}");
            assertTrue(assertAgrees(json, "document " + i), "plain: " + i);
        }
    }

    @Test
    void readsAcrossTheParsersOwnPieces() {
        int largest = 40_000;
        EventSlotReader large = new EventSlotReader(EventMapping.DEFAULT, largest, NAMES);
        for (int padding = 7_700; padding < 8_100; padding++) {
            String json = "{\"x\":\"" + "y".repeat(padding) + "\"," + VIEW.substring(1);
            assertTrue(large.read(utf8(json), slot), padding + " bytes before");
            assertEquals("EventSlot[VIEW, 0/1, 1777874400000]", slot.toString());
            assertFalse(large.read(utf8(json + json), slot), "twice " + padding + " bytes");
            assertFalse(large.read(utf8(json.substring(0, json.length() - 1)), slot), "cut short");
        }
    }

    @Test
    void leavesNothingBehindPerDocument() {
        byte[] json = utf8(VIEW.replace("}", ",\"segments\":{\"platform\":\"app\",\"version\":\"6.3\"}}"));
        ThreadMXBean threads = (ThreadMXBean) ManagementFactory.getThreadMXBean();
        long thread = Thread.currentThread().getId();
        int documents = 20_000;
        read(json, documents);
        long before = threads.getThreadAllocatedBytes(thread);
        read(json, documents);
        long bytes = threads.getThreadAllocatedBytes(thread) - before;
        assertTrue(bytes < documents, bytes + " bytes for " + documents + " documents");
    }

    private void read(byte[] json, int times) {
        for (int i = 0; i < times; i++) {
            if (!slotReader.read(json, slot)) {
                throw new AssertionError("not plain");
            }
        }
    }

    /** Returns whether the document was plain. */
    private boolean assertAgrees(byte[] json, String hint) {
        String shown = hint + ": " + new String(json, StandardCharsets.UTF_8);
        if (!slotReader.read(json, slot)) {
            return false;
        }
        assertSame(slot, reader.read(json), shown);
        return true;
    }

    private static void assertSame(EventSlot slot, Decoded decoded, String shown) {
        Event event = assertInstanceOf(Accepted.class, decoded, shown).event();
        int experiment = NAMES.experiment(event.experiment());
        EventSlot expected = new EventSlot();
        expected.take(event, experiment, NAMES.variant(experiment, event.variant()), NAMES.segments());
        assertTrue(slot.holdsTheSameAs(expected), shown);
    }

    private static void edit(byte[] json, Random random) {
        for (int edits = random.nextInt(3); edits >= 0; edits--) {
            int at = random.nextInt(json.length);
            json[at] = random.nextBoolean() ? (byte) random.nextInt(256) : json[random.nextInt(json.length)];
        }
    }

    /** Mostly an event, with fields in any order, now and then missing, twice, of another type or badly written. */
    private static String document(Random random) {
        List<String> members = new ArrayList<>();
        for (EventField field : EventField.values()) {
            for (int times = times(field, random); times > 0; times--) {
                members.add("\"" + field.code() + "\":" + value(field, random));
            }
        }
        if (random.nextInt(4) == 0) {
            members.add("\"more\":" + any(random));
        }
        Collections.shuffle(members, random);
        String[] ends = {"{}", "x", "]", "tru", "\u00e9"};
        String end = random.nextInt(10) == 0 ? ends[random.nextInt(ends.length)] : random.nextBoolean() ? "" : " \n";
        return "{" + String.join(random.nextBoolean() ? "," : " ,\n", members) + "}" + end;
    }

    private static int times(EventField field, Random random) {
        int rare = random.nextInt(60);
        if (rare < 2) {
            return 2 * rare;
        }
        return field.required() ? 1 : random.nextInt(2);
    }

    private static String value(EventField field, Random random) {
        if (random.nextInt(40) == 0) {
            return any(random);
        }
        return switch (field) {
            case KIND -> random.nextBoolean() ? "\"view\"" : "\"cl\\u0069ck\"";
            case EXPERIMENT -> random.nextInt(20) == 0 ? "\"other\"" : "\"quay-banner\"";
            case VARIANT -> random.nextBoolean() ? "\"plain\"" : "\"wide\"";
            case UNIT, ID, VIEW -> random.nextInt(10) > 0 ? "\"v" + random.nextInt(1_000_000) + "\"" : any(random);
            case AT, RECEIVED -> time(random);
            case SOURCE -> "\"web\"";
            case SEGMENTS ->
                "{\"platform\":\"" + (random.nextBoolean() ? "phone" : "web") + "\",\""
                        + "abcdefgh".charAt(random.nextInt(8)) + "\":\"x\",\"b\":"
                        + (random.nextInt(10) == 0 ? any(random) : "\"y" + random.nextInt(3) + "\"") + "}";
        };
    }

    private static String time(Random random) {
        String[] times = {
            "1777874400123",
            "-5",
            "0",
            "-0",
            "999999999999999",
            "1e3",
            "\"2026-05-04T06:00:00Z\"",
            "\"2026-05-04t06:00:00.123456+02:00\"",
            "\"2026-02-29T06:00:00Z\"",
            "\"1777874400123\"",
            "\"2016-12-31T23:59:60Z\"",
            "\"2026-05-04T06:00:00.9z\"",
            "\"2026-05-04T06:00:00\""
        };
        return times[random.nextInt(5) == 0 ? random.nextInt(times.length) : 0];
    }

    private static String any(Random random) {
        String[] values = {
            "null",
            "true",
            "0",
            "12.50",
            "-1E+2",
            "123456789012345678901234567890",
            "\"\"",
            "\" \"",
            "\"\\\"\\\\/\"",
            "\"\u26f4\"",
            "\"caf\u00e9\"",
            "\"\\ud83d\\udea2\"",
            "\"\\ud83d\"",
            "[]",
            "[1,[2,{\"unit\":3}]]",
            "{}",
            "{\"kind\":\"view\"}",
            "01",
            "nul",
            "NaN",
            "'x'",
            "\"a\tb\"",
            "\"\\x\"",
            "\"" + "u".repeat(256) + "\"",
            "\"" + "u".repeat(257) + "\"",
            "\"\u00ff\"",
            "\"visitor\"",
            "\"V-1\"",
            "7",
            "-7"
        };
        return values[random.nextInt(values.length)];
    }

    private static byte[] utf8(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }
}
