package io.tallyward.connector.format;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import com.networknt.schema.Error;
import com.networknt.schema.InputFormat;
import com.networknt.schema.Schema;
import com.networknt.schema.SchemaRegistry;
import com.networknt.schema.SpecificationVersion;
import io.tallyward.connector.format.Decoded.Accepted;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Silence;
import io.tallyward.engine.record.SplitPeak;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.io.IOException;
import java.io.InputStream;
import java.lang.reflect.RecordComponent;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Set;
import java.util.TreeSet;
import java.util.function.Function;
import java.util.stream.Collectors;
import java.util.stream.Stream;
import org.junit.jupiter.api.Test;

/** The published schemas against what is written and read, judged by a general-purpose validator. */
class SchemaTest {

    private static final ObjectMapper MAPPER = new ObjectMapper();

    private final Schema event = schema("event");
    private final Schema decision = schema("decision");
    private final Schema notice = schema("notice");

    @Test
    void holdsForEveryRecordWritten() {
        for (int seed = 0; seed < 200; seed++) {
            RandomRecords random = new RandomRecords(seed);
            assertEquals(List.of(), errors(decision, text(DecisionJson.write(random.decision()))), "seed " + seed);
            assertEquals(List.of(), errors(notice, text(NoticeJson.write(random.notice()))), "seed " + seed);
        }
    }

    @Test
    void requiresEveryMemberTheReadersRequire() throws IOException {
        for (int seed = 0; seed < 20; seed++) {
            RandomRecords random = new RandomRecords(seed);
            refusesEachMissing(decision, DecisionJson.write(random.decision()));
            refusesEachMissing(notice, NoticeJson.write(random.notice()));
        }
    }

    @Test
    void refusesMembersOfADecisionThatItDoesNotKnow() throws IOException {
        for (int seed = 0; seed < 20; seed++) {
            JsonNode tree = MAPPER.readTree(DecisionJson.write(new RandomRecords(seed).decision()));
            for (ObjectNode object : objects(tree)) {
                if (object.isEmpty()
                        || !Character.isDigit(names(object).iterator().next().charAt(0))) {
                    object.put("sinceTheNextVersion", true);
                    assertFalse(errors(decision, tree.toString()).isEmpty(), "seed " + seed + ": " + names(object));
                    object.remove("sinceTheNextVersion");
                }
            }
        }
    }

    @Test
    void describesEveryComponentUnderItsName() throws IOException {
        JsonNode decisions = tree("decision");
        Set<String> members = components(DecisionRecord.class);
        members.add("type");
        assertEquals(members, names(decisions.at("/properties")));
        assertEquals(components(DecisionRecord.Split.class), names(decisions.at("/$defs/split/properties")));
        assertEquals(components(DecisionRecord.Comparison.class), names(decisions.at("/$defs/comparison/properties")));
        assertEquals(components(DecisionRecord.VariantCount.class), names(decisions.at("/$defs/count/properties")));
        assertEquals(components(Plan.class), names(decisions.at("/$defs/plan/properties")));
        assertEquals(components(TestPlan.class), names(decisions.at("/$defs/test/properties")));
        assertEquals(components(Silence.class), names(decisions.at("/properties/silence/properties")));
        assertEquals(components(SplitPeak.class), names(decisions.at("/$defs/split/properties/peak/properties")));
        assertEquals(components(Notice.class), names(tree("notice").at("/properties")));
        Set<String> fields =
                Stream.of(EventField.values()).map(EventField::code).collect(Collectors.toCollection(TreeSet::new));
        assertEquals(fields, names(tree("event").at("/properties")));
    }

    @Test
    void listsEveryPublishedCode() throws IOException {
        JsonNode decisions = tree("decision");
        assertEquals(codes(Occasion.values(), Occasion::code), texts(decisions.at("/properties/occasion/enum")));
        assertEquals(codes(Trust.values(), Trust::code), texts(decisions.at("/properties/trust/enum")));
        assertEquals(codes(Verdict.values(), Verdict::code), texts(decisions.at("/$defs/verdict/enum")));
        List<String> outcomes = new ArrayList<>(codes(Outcome.values(), Outcome::code));
        outcomes.add("orphanByVariant");
        assertEquals(outcomes, texts(decisions.at("/properties/outcomes/required")));
        assertEquals(
                codes(Notice.Kind.values(), Notice.Kind::code),
                texts(tree("notice").at("/properties/kind/enum")));
        assertEquals(
                codes(Notice.Severity.values(), Notice.Severity::code),
                texts(tree("notice").at("/properties/severity/enum")));
        List<String> required = Stream.of(EventField.values())
                .filter(EventField::required)
                .map(EventField::code)
                .toList();
        assertEquals(required, texts(tree("event").at("/required")));
    }

    @Test
    void judgesEventsAsTheReaderDoes() throws IOException {
        JsonEventReader reader = new JsonEventReader(EventMapping.DEFAULT, 100_000);
        ObjectNode base = (ObjectNode)
                MAPPER.readTree(
                        "{\"kind\":\"view\",\"experiment\":\"fare-chip\",\"variant\":\"plain\",\"unit\":\"u\",\"id\":\"e\",\"at\":0}");
        List<String> values = new ArrayList<>(List.of(
                "null",
                "true",
                "1",
                "1.5",
                "-1e300",
                "\"\"",
                "\"view\"",
                "\"2026-05-04T06:00:00.5+02:00\"",
                "[]",
                "{}",
                "\"2026-02-30T06:00:00Z\"",
                "{\"a\":\"b\"}",
                "{\"a\":null}",
                "{\"a\":1}",
                "253402300799999",
                "253402300800000"));
        Stream.of(64, 65, 256, 257).forEach(length -> {
            values.add("\"" + "x".repeat(length) + "\"");
            values.add("{\"" + "x".repeat(length) + "\":\"y\"}");
            values.add("{\"y\":\"" + "x".repeat(length) + "\"}");
        });
        for (EventField field : EventField.values()) {
            for (String value : values) {
                ObjectNode document = base.deepCopy();
                document.set(field.code(), MAPPER.readTree(value));
                boolean accepted = reader.read(MAPPER.writeValueAsBytes(document)) instanceof Accepted;
                assertEquals(accepted, errors(event, document.toString()).isEmpty(), document::toString);
            }
            ObjectNode document = base.deepCopy();
            document.remove(field.code());
            boolean accepted = reader.read(MAPPER.writeValueAsBytes(document)) instanceof Accepted;
            assertEquals(accepted, errors(event, document.toString()).isEmpty(), document::toString);
        }
    }

    private static void refusesEachMissing(Schema schema, byte[] bytes) throws IOException {
        JsonNode tree = MAPPER.readTree(bytes);
        for (ObjectNode object : objects(tree)) {
            if (object == tree.get("facts")) {
                continue;
            }
            for (String name : names(object)) {
                if (Character.isDigit(name.charAt(0))) {
                    continue;
                }
                JsonNode removed = object.remove(name);
                assertFalse(errors(schema, tree.toString()).isEmpty(), "without " + name);
                object.set(name, removed);
            }
        }
    }

    private static List<ObjectNode> objects(JsonNode tree) {
        List<ObjectNode> objects = new ArrayList<>();
        if (tree instanceof ObjectNode object) {
            objects.add(object);
        }
        tree.forEach(child -> objects.addAll(objects(child)));
        return objects;
    }

    private static List<Error> errors(Schema schema, String json) {
        return schema.validate(
                json,
                InputFormat.JSON,
                context -> context.executionConfig(config -> config.formatAssertionsEnabled(true)));
    }

    private static Schema schema(String name) {
        return SchemaRegistry.withDefaultDialect(SpecificationVersion.DRAFT_2020_12)
                .getSchema(resource(name), InputFormat.JSON);
    }

    private static JsonNode tree(String name) throws IOException {
        return MAPPER.readTree(resource(name));
    }

    private static InputStream resource(String name) {
        return SchemaTest.class.getResourceAsStream("/schema/" + name + ".schema.json");
    }

    private static Set<String> components(Class<? extends Record> type) {
        return Arrays.stream(type.getRecordComponents())
                .map(RecordComponent::getName)
                .collect(Collectors.toCollection(TreeSet::new));
    }

    private static Set<String> names(JsonNode object) {
        Set<String> names = new TreeSet<>();
        object.fieldNames().forEachRemaining(names::add);
        return names;
    }

    private static <E> List<String> codes(E[] values, Function<E, String> codeOf) {
        return Arrays.stream(values).map(codeOf).toList();
    }

    private static List<String> texts(JsonNode array) {
        List<String> texts = new ArrayList<>();
        ((ArrayNode) array).forEach(item -> texts.add(item.asText()));
        return texts;
    }

    private static String text(byte[] bytes) {
        return new String(bytes, StandardCharsets.UTF_8);
    }
}
