package io.tallyward.connector.format;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertInstanceOf;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.core.JsonPointer;
import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.connector.format.Decoded.Accepted;
import io.tallyward.connector.format.Decoded.Refused;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.RejectReason;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.Collections;
import java.util.EnumMap;
import java.util.List;
import java.util.Map;
import java.util.OptionalLong;
import java.util.Random;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;
import org.junit.jupiter.params.provider.ValueSource;

class JsonEventReaderTest {

    private static final int MAX_BYTES = 4096;
    private static final String UNIT = "unit-canary-77";
    private static final String VIEW =
            "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"wide\",\"unit\":\"" + UNIT
                    + "\",\"id\":\"e1\",\"at\":\"2026-05-04T06:00:00Z\"}";
    private static final long AT = Instant.parse("2026-05-04T06:00:00Z").toEpochMilli();

    private final JsonEventReader reader = new JsonEventReader(EventMapping.DEFAULT, MAX_BYTES);

    @Test
    void readsTheLeastAnEventNeeds() {
        Event event = new Event(EventKind.VIEW, "quay-banner", "wide", UNIT, "", "e1", AT, "", Map.of());
        assertEquals(new Accepted(event, OptionalLong.empty()), read(VIEW));
    }

    @Test
    void readsEverythingAnEventMayHave() {
        String json =
                "{\"received\":\"2026-05-04T08:00:01.5+02:00\",\"segments\":{\"platform\":\"phone\",\"lang\":null},"
                        + "\"view\":7,\"source\":\"web\",\"at\":1777874400123,\"id\":12.50,\"unit\":991,\"variant\":\"wide\","
                        + "\"experiment\":\"quay-banner\",\"kind\":\"click\",\"unknown\":[{\"kind\":\"x\"},[[1e999]]]}";
        Event event = new Event(
                EventKind.CLICK,
                "quay-banner",
                "wide",
                "991",
                "web",
                "12.50",
                AT + 123,
                "7",
                Map.of("platform", "phone"));
        assertEquals(new Accepted(event, OptionalLong.of(AT + 1500)), read(json));
    }

    @Test
    void takesNullAndEmptyOptionalFieldsForAbsent() {
        assertEquals(read(VIEW), read(with("\"source\":null,\"view\":\"\",\"segments\":null,\"received\":\"\"")));
    }

    @ParameterizedTest
    @ValueSource(
            strings = {
                "",
                " ",
                "null",
                "[]",
                "[{\"kind\":\"view\"}]",
                "\"view\"",
                "12",
                "NaN",
                "{",
                "{\"kind\"",
                "{\"kind\":}",
                "{'kind':'view'}",
                "{\"kind\":view}",
                "{\"at\":NaN}",
                "{\"at\":01}",
                "{\"kind\":\"view\",}",
                "{\"kind\":\"a\nb\"}",
                "{\"kind\":\"\\x\"}",
                "{} {}",
                "{}]",
                "{}x",
                "/* c */ {}"
            })
    void refusesWhatIsNotOneJsonObject(String text) {
        assertRefused(RejectReason.UNPARSABLE, read(text));
    }

    @Test
    void refusesEveryTruncation() {
        byte[] whole = with("\"segments\":{\"platform\":\"phone\"}").getBytes(StandardCharsets.UTF_8);
        for (int length = 0; length < whole.length; length++) {
            assertRefused(RejectReason.UNPARSABLE, reader.read(Arrays.copyOf(whole, length)));
        }
    }

    @Test
    void refusesNoValueAndOtherEncodings() {
        assertRefused(RejectReason.UNPARSABLE, reader.read(null));
        assertRefused(RejectReason.UNPARSABLE, reader.read(VIEW.getBytes(StandardCharsets.UTF_16)));
        assertRefused(RejectReason.UNPARSABLE, reader.read(VIEW.getBytes(StandardCharsets.UTF_16LE)));
        String accented = VIEW.replace("wide", "w\u00efde");
        assertInstanceOf(Accepted.class, read(accented));
        assertRefused(RejectReason.UNPARSABLE, reader.read(accented.getBytes(StandardCharsets.ISO_8859_1)));
    }

    @Test
    void ignoresAByteOrderMark() {
        assertEquals(read(VIEW), read("\ufeff" + VIEW));
        assertRefused(RejectReason.UNPARSABLE, read("\ufeff"));
    }

    @Test
    void refusesHalfASurrogatePairBecauseTwoUnitsCouldBecomeOne() {
        assertRefused(RejectReason.UNPARSABLE, read(VIEW.replace(UNIT, "\\ud83d")));
        assertRefused(RejectReason.UNPARSABLE, read(VIEW.replace(UNIT, "\\udea2\\ud83d")));
        assertInstanceOf(Accepted.class, read(VIEW.replace(UNIT, "\\ud83d\\udea2")));
        assertRefused(RejectReason.UNPARSABLE, read(with("\"segments\":{\"platform\":\"\\ud83d\"}")));
    }

    @Test
    void refusesAMappedFieldGivenTwice() {
        assertEquals(
                new Refused(RejectReason.UNPARSABLE, "unit at /unit: given twice (expected: once)"),
                read(with("\"unit\":\"" + UNIT + "\"")));
        assertInstanceOf(Accepted.class, read(with("\"other\":1,\"other\":2")));
        assertRefused(RejectReason.UNPARSABLE, read(with("\"segments\":{\"a\":\"1\",\"a\":\"2\"}")));
    }

    @ParameterizedTest
    @ValueSource(strings = {"kind", "experiment", "variant", "unit", "id", "at"})
    void refusesAnEventWithoutARequiredField(String field) throws IOException {
        ObjectNode tree = (ObjectNode) new ObjectMapper().readTree(VIEW);
        tree.remove(field);
        Refused absent = assertRefused(RejectReason.MISSING_FIELD, read(tree.toString()));
        assertTrue(absent.detail().startsWith(field + " at /" + field + ": missing (expected: "), absent.detail());
        assertEquals(absent, read(tree.putNull(field).toString()));
        assertRefused(RejectReason.MISSING_FIELD, read(tree.put(field, "").toString()));
        assertRefused(RejectReason.MISSING_FIELD, read(tree.put(field, true).toString()));
        tree.putArray(field).add("x");
        assertRefused(RejectReason.MISSING_FIELD, read(tree.toString()));
        tree.putObject(field).put(field, "x");
        assertRefused(RejectReason.MISSING_FIELD, read(tree.toString()));
    }

    @ParameterizedTest
    @CsvSource(
            delimiter = '|',
            quoteCharacter = '`',
            value = {
                "\"kind\":1         | kind at /kind: a number (expected: \"click\" or \"view\")",
                "\"experiment\":1   | experiment at /experiment: a number (expected: text)",
                "\"source\":1       | source at /source: a number (expected: text)",
                "\"view\":false     | view at /view: true or false (expected: text or a number)",
                "\"segments\":\"a\" | segments at /segments: text (expected: an object of text)",
                "\"segments\":[]    | segments at /segments: an array (expected: an object of text)",
                "\"segments\":{\"a\":1}  | segments at /segments: holds a number (expected: text only)",
                "\"segments\":{\"a\":{}} | segments at /segments: holds an object (expected: text only)"
            })
    void refusesFieldsOfTheWrongType(String member, String detail) throws IOException {
        ObjectNode tree = (ObjectNode) new ObjectMapper().readTree(VIEW);
        tree.setAll((ObjectNode) new ObjectMapper().readTree("{" + member + "}"));
        assertEquals(new Refused(RejectReason.MISSING_FIELD, detail), read(tree.toString()));
    }

    @Test
    void namesTheKindItDoesNotKnow() {
        assertEquals(
                new Refused(
                        RejectReason.MISSING_FIELD,
                        "kind at /kind: \"imp\\\"ression\\u000a\\u00fc\" (expected: \"click\" or \"view\")"),
                read(VIEW.replace("\"view\"", "\"imp\\\"ression\\n\u00fc\"")));
        Refused cut = assertRefused(
                RejectReason.MISSING_FIELD, read(VIEW.replace("\"view\"", "\"" + "k".repeat(200) + "\"")));
        assertEquals("kind at /kind: \"" + "k".repeat(40) + "...\" (expected: \"click\" or \"view\")", cut.detail());
    }

    @ParameterizedTest
    @ValueSource(
            strings = {
                "\"yesterday\"",
                "\"1777874400000\"",
                "\"2026-05-04T06:00:00\"",
                "1777874400.5",
                "1.7778744e12",
                "-62167219200001",
                "253402300800000",
                "99999999999999999999999999",
                "-99999999999999999999999999"
            })
    void refusesTimesItCannotRead(String time) {
        String json = VIEW.replace("\"2026-05-04T06:00:00Z\"", time);
        Refused refusal = assertRefused(RejectReason.BAD_TIME, read(json));
        assertTrue(refusal.detail().startsWith("at at /at: \"" + time.replace("\"", "")), refusal.detail());
        assertRefused(RejectReason.BAD_TIME, read(with("\"received\":" + time)));
    }

    @ParameterizedTest
    @ValueSource(strings = {"-62167219200000", "-1", "-0", "0", "253402300799999"})
    void readsEpochMillisInTheWholeRange(String time) {
        Accepted accepted = assertInstanceOf(Accepted.class, read(VIEW.replace("\"2026-05-04T06:00:00Z\"", time)));
        assertEquals(Long.parseLong(time), accepted.event().atMillis());
    }

    @Test
    void refusesWhatIsTooLarge() {
        assertRefused(RejectReason.OVERSIZED, read(with("\"pad\":\"" + "x".repeat(MAX_BYTES) + "\"")));
        assertRefused(RejectReason.OVERSIZED, read(VIEW.replace(UNIT, "u".repeat(257))));
        assertInstanceOf(Accepted.class, read(VIEW.replace(UNIT, "u".repeat(256))));
        assertRefused(RejectReason.OVERSIZED, read(VIEW.replace("\"" + UNIT + "\"", "9".repeat(257))));
        assertRefused(RejectReason.OVERSIZED, read(VIEW.replace("\"" + UNIT + "\"", "9".repeat(3000))));
        assertRefused(RejectReason.OVERSIZED, read(with("\"source\":\"" + "s".repeat(257) + "\"")));
        assertRefused(RejectReason.OVERSIZED, read(with("\"deep\":" + "[".repeat(1000) + "]".repeat(1000))));
        assertRefused(RejectReason.OVERSIZED, read(with("\"deep\":" + "{\"a\":".repeat(500))));
    }

    @Test
    void boundsSegments() {
        assertInstanceOf(Accepted.class, read(with("\"segments\":{" + entries(8) + "}")));
        assertRefused(RejectReason.OVERSIZED, read(with("\"segments\":{" + entries(9) + "}")));
        assertInstanceOf(Accepted.class, read(with("\"segments\":{\"" + "n".repeat(64) + "\":\"v\"}")));
        assertRefused(RejectReason.OVERSIZED, read(with("\"segments\":{\"" + "n".repeat(65) + "\":\"v\"}")));
        assertRefused(RejectReason.OVERSIZED, read(with("\"segments\":{\"n\":\"" + "v".repeat(65) + "\"}")));
    }

    /** The document and the pointers of RFC 6901, section 5, with the values that it states. */
    @ParameterizedTest
    @CsvSource(
            quoteCharacter = '`',
            value = {
                "/,0",
                "/a~1b,1",
                "/c%d,2",
                "/e^f,3",
                "/g|h,4",
                "/i\\j,5",
                "/k\"l,6",
                "`/ `,7",
                "/m~0n,8",
                "/foo/0,bar"
            })
    void followsThePointersOfTheStandard(String pointer, String expected) {
        String json = with("\"foo\":[\"bar\",\"baz\"],\"\":0,\"a/b\":1,\"c%d\":2,\"e^f\":3,\"g|h\":4,\"i\\\\j\":5,"
                + "\"k\\\"l\":6,\" \":7,\"m~n\":8");
        JsonEventReader mapped = new JsonEventReader(EventMapping.DEFAULT.with(EventField.UNIT, pointer), MAX_BYTES);
        Accepted accepted = assertInstanceOf(Accepted.class, mapped.read(json.getBytes(StandardCharsets.UTF_8)));
        assertEquals(expected, accepted.event().unit());
    }

    /** A CloudEvents 1.0 event in structured mode is one more mapping. */
    @Test
    void readsCloudEventsThroughAMapping() {
        EventMapping mapping = EventMapping.DEFAULT
                .with(EventField.KIND, "/type")
                .with(EventField.AT, "/time")
                .with(EventField.EXPERIMENT, "/data/shown/0/experiment")
                .with(EventField.VARIANT, "/data/shown/0/variant")
                .with(EventField.UNIT, "/data/visitor")
                .with(EventField.SEGMENTS, "/data/device")
                .withKinds(Map.of("com.northwater.shown", EventKind.VIEW, "com.northwater.pressed", EventKind.CLICK));
        String json = "{\"specversion\":\"1.0\",\"id\":\"e1\",\"source\":\"/web\",\"type\":\"com.northwater.pressed\","
                + "\"time\":\"2026-05-04T06:00:00Z\",\"data\":{\"visitor\":\"v9\",\"device\":{\"os\":\"x\"},"
                + "\"shown\":[{\"experiment\":\"deck-map\",\"variant\":\"flat\"},{\"experiment\":\"other\"}]}}";
        Event event = new Event(EventKind.CLICK, "deck-map", "flat", "v9", "/web", "e1", AT, "", Map.of("os", "x"));
        assertEquals(
                new Accepted(event, OptionalLong.empty()),
                new JsonEventReader(mapping, MAX_BYTES).read(json.getBytes(StandardCharsets.UTF_8)));
    }

    /** Jackson's own tree and pointers as the independent reader. */
    @Test
    void agreesWithATreeOnNestedDocumentsInAnyOrder() throws IOException {
        ObjectMapper mapper = new ObjectMapper();
        for (int seed = 0; seed < 400; seed++) {
            Random random = new Random(seed);
            Map<EventField, String> pointers = new EnumMap<>(EventField.class);
            ObjectNode tree = mapper.createObjectNode();
            List<EventField> fields = new ArrayList<>(List.of(EventField.values()));
            Collections.shuffle(fields, random);
            for (EventField field : fields) {
                String parent =
                        random.nextBoolean() ? "" : "/p" + random.nextInt(3) + (random.nextBoolean() ? "" : "/q");
                pointers.put(field, parent + "/" + field.code());
                ObjectNode place = parent.isEmpty() ? tree : tree.withObject(JsonPointer.compile(parent));
                place.set(field.code(), value(mapper, field, random));
            }
            EventMapping mapping = new EventMapping(pointers, EventMapping.DEFAULT.kinds());
            Decoded decoded = new JsonEventReader(mapping, MAX_BYTES).read(mapper.writeValueAsBytes(tree));
            Accepted accepted = assertInstanceOf(Accepted.class, decoded, "seed " + seed);
            for (EventField field : EventField.values()) {
                assertEquals(tree.at(pointers.get(field)).asText(), text(accepted, field), field + ", seed " + seed);
            }
        }
    }

    @Test
    void neverThrowsNorTellsTheUnitWhateverTheBytes() {
        byte[] whole = with("\"segments\":{\"platform\":\"phone\"},\"view\":\"v1\",\"source\":\"web\",\"received\":1")
                .getBytes(StandardCharsets.UTF_8);
        Random random = new Random(20260504);
        int accepted = 0;
        for (int i = 0; i < 30_000; i++) {
            byte[] bytes = whole.clone();
            for (int edits = random.nextInt(4); edits >= 0; edits--) {
                int at = random.nextInt(bytes.length);
                bytes[at] = random.nextBoolean() ? (byte) random.nextInt(256) : bytes[random.nextInt(bytes.length)];
            }
            if (reader.read(bytes) instanceof Refused refused) {
                assertFalse(refused.detail().contains(UNIT), refused.detail());
                assertTrue(refused.detail().length() <= Quoted.MAX_DETAIL, refused.detail());
                assertTrue(refused.detail().chars().allMatch(c -> c >= ' ' && c <= '~'), refused.detail());
            } else {
                accepted++;
            }
        }
        assertTrue(accepted > 300, "the fuzz reaches both sides: " + accepted + " accepted");
    }

    @Test
    void doesNotTellTheUnitThroughAWrongMapping() {
        for (EventField field : List.of(EventField.KIND, EventField.AT)) {
            JsonEventReader mapped = new JsonEventReader(EventMapping.DEFAULT.with(field, "/unit"), MAX_BYTES);
            Decoded decoded = mapped.read(VIEW.getBytes(StandardCharsets.UTF_8));
            assertFalse(assertInstanceOf(Refused.class, decoded).detail().contains("canary"));
        }
    }

    private Decoded read(String json) {
        return reader.read(json.getBytes(StandardCharsets.UTF_8));
    }

    private static Refused assertRefused(RejectReason reason, Decoded decoded) {
        Refused refused = assertInstanceOf(Refused.class, decoded);
        assertEquals(reason, refused.reason(), refused.detail());
        assertFalse(refused.detail().contains(UNIT), refused.detail());
        return refused;
    }

    private static String with(String members) {
        return VIEW.substring(0, VIEW.length() - 1) + "," + members + "}";
    }

    private static String entries(int count) {
        List<String> entries = new ArrayList<>();
        for (int i = 0; i < count; i++) {
            entries.add("\"n" + i + "\":\"v\"");
        }
        return String.join(",", entries);
    }

    private static JsonNode value(ObjectMapper mapper, EventField field, Random random) {
        var nodes = mapper.getNodeFactory();
        return switch (field) {
            case KIND -> nodes.textNode(random.nextBoolean() ? "view" : "click");
            case AT, RECEIVED -> nodes.numberNode(random.nextInt(1_000_000_000));
            case SEGMENTS -> nodes.objectNode();
            case UNIT, ID, VIEW -> random.nextBoolean() ? nodes.numberNode(random.nextLong()) : nodes.textNode("u");
            case EXPERIMENT, VARIANT, SOURCE -> nodes.textNode("\u26f4 " + random.nextInt(100));
        };
    }

    private static String text(Accepted accepted, EventField field) {
        Event event = accepted.event();
        return switch (field) {
            case KIND -> event.kind() == EventKind.VIEW ? "view" : "click";
            case EXPERIMENT -> event.experiment();
            case VARIANT -> event.variant();
            case UNIT -> event.unit();
            case ID -> event.id();
            case AT -> Long.toString(event.atMillis());
            case SOURCE -> event.source();
            case VIEW -> event.viewId();
            case SEGMENTS -> String.join("", event.segments().keySet());
            case RECEIVED -> Long.toString(accepted.receivedMillis().orElseThrow());
        };
    }
}
