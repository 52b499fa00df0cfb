package io.tallyward.service.plan;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.json.JsonMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import com.fasterxml.jackson.dataformat.yaml.YAMLMapper;
import com.networknt.schema.InputFormat;
import com.networknt.schema.Schema;
import com.networknt.schema.SchemaRegistry;
import com.networknt.schema.SpecificationVersion;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.config.document.Shape;
import io.tallyward.service.config.document.ValueType;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import java.util.Set;
import java.util.TreeSet;
import java.util.function.BiConsumer;
import java.util.regex.Matcher;
import java.util.regex.Pattern;
import java.util.stream.Stream;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

/** The published schema of plan files, read by a general-purpose validator, against the reader of plans. */
class PlanSchemaTest {

    private static final Path ROOT = Path.of("..", "..");
    private static final Path PUBLISHED = ROOT.resolve("connectors/formats/src/main/resources/schema/plan.schema.json");
    private static final YAMLMapper YAML = new YAMLMapper();
    private static final JsonMapper JSON = new JsonMapper();

    private static final Schema SCHEMA = SchemaRegistry.withDefaultDialect(SpecificationVersion.DRAFT_2020_12)
            .getSchema(PlanSchema.text(), InputFormat.JSON);

    /** Between them they write every key. */
    private static final List<String> FULL =
            List.of("""
            experiment: deck-map
            question: which deck map helps?
            owner: web-growth@northwater.example
            better: lower
            count: {by: unit, attribution: PT1H, grace: PT5M, window: PT15M}
            variants:
              flat: {share: 0.8, control: true}
              tilted: {share: 0.1, control: false}
              round: {share: 0.1}
            test:
              alpha: 0.04
              sides: two
              power: 0.9
              baseline: 0.3
              smallest-effect: {relative: 0.05}
              spending: {hwang-shih-decani: -2}
              benefit: {alpha: 0.03, silent-before: 0.25}
              harm: {alpha: 0.01, spending: {table: {0.25: 0.1, 1: 1}}}
              alpha-sharing: split
              clock: information
              information: observed
              minimum-per-cell: 20
            looks: {fractions: [0.25, 0.5, 0.75, 1.0]}
            futility: {spending: {kim-demets: 3}}
            split-check: {alpha: 0.01, segments: [version, platform]}
            trust: {crossover-share: 0.05, late-share: 0.01, starved-after: PT2H}
            run: {from: 2026-05-04T00:00:00+02:00, at-least: P7D, whole-weeks: true, at-most: P14D}
            epochs:
              - from: 2026-05-06T00:00:00Z
                shares: {flat: 0.34, tilted: 0.33, round: 0.33}
            amendments:
              - {at: 2026-05-07T00:00:00Z, reason: a storm, shares: {flat: 0.34, tilted: 0.33, round: 0.33}}
              - {at: 2026-05-08T00:00:00Z, reason: it lasts, end: 2026-05-20T00:00:00Z}
              - {at: 2026-05-09T00:00:00Z, reason: it is over, stop: true}
            """, PlanReaderTest.MINIMAL + "futility: {conditional-power: 0.2, under: none}\n");

    private static boolean takes(JsonNode plan) {
        return SCHEMA.validate(plan.toString(), InputFormat.JSON).isEmpty();
    }

    private static List<Problem> problems(JsonNode plan) {
        try {
            return PlanReader.parse("plan.yaml", plan.toString()).problems();
        } catch (RuntimeException e) {
            throw new AssertionError("the reader fails on " + plan, e);
        }
    }

    /** Written by {@code tallyward schema plan}. */
    @Test
    void isPublishedAsItIsGenerated() throws IOException {
        assertEquals(Files.readString(PUBLISHED), PlanSchema.text() + "\n");
    }

    @Test
    void holdsForEveryPlanOfTheRepository() throws IOException {
        int plans = 0;
        for (String directory : List.of("README.md", "deploy", "demo-streams/src", "monitor/service/src/test")) {
            try (Stream<Path> files = Files.walk(ROOT.resolve(directory))) {
                for (Path file : files.filter(Files::isRegularFile).toList()) {
                    for (String plan : plans(file)) {
                        assertEquals(
                                List.of(),
                                SCHEMA.validate(YAML.readTree(plan).toString(), InputFormat.JSON),
                                file + "\n" + plan);
                        plans++;
                    }
                }
            }
        }
        assertTrue(plans > 15, plans + " plans");
    }

    /** Files of plans, and what stands between the marks of a block of text or code, as far as the reader takes it. */
    private static List<String> plans(Path file) throws IOException {
        String name = file.getFileName().toString();
        List<String> texts = new ArrayList<>();
        if (name.endsWith(".yaml")) {
            texts.add(Files.readString(file));
        } else if (name.endsWith(".java") || name.endsWith(".md")) {
            Matcher blocks = Pattern.compile("(?s)(?:\"\"\"|```yaml)\\n(.*?)(?:\"\"\"|```)")
                    .matcher(Files.readString(file));
            blocks.results().forEach(block -> texts.add(block.group(1).stripIndent()));
        }
        return texts.stream()
                .filter(text -> PlanReader.parse(name, text).problems().isEmpty())
                .toList();
    }

    @Test
    void knowsEveryKeyWithWhatItMeans() throws IOException {
        JsonNode schema = JSON.readTree(PlanSchema.text());
        int keys = compare(PlanKeys.SHAPE, schema);
        assertTrue(keys > 45, keys + " keys");
    }

    private static int compare(Shape shape, JsonNode schema) {
        int keys = 0;
        for (Key<?> key : shape.keys()) {
            JsonNode property = schema.get("properties").get(key.name());
            assertTrue(property.get("description").asText().startsWith(key.doc()), key.name());
            keys += 1 + (key.type() instanceof Shape inner ? compare(inner, property) : 0);
        }
        assertEquals(shape.keys().size(), schema.get("properties").size());
        return keys;
    }

    /** Whatever a place of a plan holds instead: if its type is what the reader refuses, the schema refuses it too. */
    @Test
    void refusesWhatIsOfTheWrongShape() throws IOException {
        List<JsonNode> values = new ArrayList<>();
        for (String value : List.of(
                "true",
                "null",
                "-1",
                "0",
                "1e-10",
                "0.5",
                "0.50001",
                "1",
                "1.5",
                "3",
                "21",
                "1001",
                "2000000",
                "1e300",
                "\"\"",
                "\" \"",
                "\"x y\"",
                "\"unit\"",
                "\"pocock\"",
                "\"P1W\"",
                "\"PT\"",
                "\"PT0S\"",
                "\"PT1.0001S\"",
                "\"2026-05-04\"",
                "\"2026-05-04T00:00:00\"",
                "[]",
                "[0.5]",
                "[1, 1]",
                "[{}]",
                "{}",
                "{\"x\": 1}",
                "{\"kim-demets\": 21}",
                "{\"table\": {\"2\": 1}}",
                "{\"relative\": 0}",
                "{\"a\": 0.5, \"b\": 0.5}")) {
            values.add(JSON.readTree(value));
        }
        values.add(JSON.getNodeFactory().textNode("x".repeat(501)));
        int[] refused = new int[1];
        for (String text : FULL) {
            JsonNode plan = YAML.readTree(text);
            assertEquals(List.of(), problems(plan));
            assertTrue(takes(plan));
            everyPlace(plan, (parent, at) -> {
                JsonNode before = put(parent, at, null);
                refused[0] += agree(plan, at + " removed", parent, at);
                for (JsonNode value : values) {
                    put(parent, at, value);
                    refused[0] += agree(plan, at + ": " + value, parent, at);
                }
                put(parent, at, before);
            });
        }
        assertTrue(refused[0] > 1500, refused[0] + " refused by both");
    }

    /**
     * Both refuse, or the reader's reason is no matter of shape. What the schema refuses the reader never takes, but for numbers
     * and the like where a text has to stand: to the reader all scalars are texts, while the schema asks for quotes.
     */
    private static int agree(JsonNode plan, String change, JsonNode parent, String at) {
        boolean taken = takes(plan);
        List<Problem> problems = problems(plan);
        if (!taken && problems.isEmpty()) {
            JsonNode value = parent instanceof ArrayNode ? parent.get(Integer.parseInt(at)) : parent.get(at);
            assertTrue(value != null && !value.isObject(), () -> change + " is a plan, and the schema refuses it");
            put(parent, at, quoted(value));
            assertTrue(takes(plan), () -> change + " in quotes is a plan, and the schema refuses it");
        }
        if (taken) {
            for (Problem problem : problems) {
                assertFalse(ofShape(problem), () -> change + ": the schema takes what is wrong, " + problem.message());
            }
        }
        return taken ? 0 : 1;
    }

    private static JsonNode quoted(JsonNode value) {
        if (!value.isArray()) {
            return JSON.getNodeFactory().textNode(value.asText());
        }
        ArrayNode texts = JSON.createArrayNode();
        value.forEach(item -> texts.add(quoted(item)));
        return texts;
    }

    private static boolean ofShape(Problem problem) {
        if (problem.found().equals("missing") || problem.found().equals("unknown key")) {
            return true;
        }
        boolean duration = problem.expected().startsWith("ISO 8601 duration")
                && ScalarType.parseDuration(problem.found()).isPresent();
        return EXPECTED.contains(problem.expected()) && !duration;
    }

    /** What the types of the plan's keys expect, as opposed to the rules between keys. */
    private static final Set<String> EXPECTED = expected(PlanKeys.SHAPE, new TreeSet<>());

    private static Set<String> expected(Shape shape, Set<String> texts) {
        for (Key<?> key : shape.keys()) {
            ValueType<?> type = key.type();
            texts.add(type.expected());
            if (type instanceof Shape inner) {
                expected(inner, texts);
            }
        }
        return texts;
    }

    private static JsonNode put(JsonNode parent, String at, JsonNode value) {
        if (parent instanceof ArrayNode array) {
            int index = Integer.parseInt(at);
            return value == null ? array.set(index, JSON.nullNode()) : array.set(index, value);
        }
        ObjectNode object = (ObjectNode) parent;
        return value == null ? object.remove(at) : object.set(at, value);
    }

    private static void everyPlace(JsonNode node, BiConsumer<JsonNode, String> visit) {
        List<String> places = new ArrayList<>();
        if (node instanceof ObjectNode object) {
            object.fieldNames().forEachRemaining(places::add);
        } else if (node instanceof ArrayNode array) {
            for (int i = 0; i < array.size(); i++) {
                places.add(String.valueOf(i));
            }
        }
        for (String place : places) {
            everyPlace(node instanceof ArrayNode ? node.get(Integer.parseInt(place)) : node.get(place), visit);
            visit.accept(node, place);
        }
    }

    /** The plans of {@link PlanReaderTest} that are refused for what one value is. */
    @ParameterizedTest
    @ValueSource(
            strings = {
                "experiment: quay-banner -> experiment: Quay Banner",
                "owner: web-growth@northwater.example -> ",
                "looks: -> count: {by: visit}\nlooks:",
                "alpha: 0.05 -> alpha: 0.7",
                "alpha: 0.05 -> alpha: 0.05, sides: both",
                "alpha: 0.05 -> alpha: 0.05, spending: fleming",
                "alpha: 0.05 -> alpha: 0.05, spending: obrien-flemming",
                "alpha: 0.05 -> alpha: 0.05, spending: kim-demets",
                "alpha: 0.05 -> alpha: 0.05, spending: {kim-demets: 0}",
                "alpha: 0.05 -> alpha: 0.05, spending: {table: {}}",
                "alpha: 0.05 -> alpha: 0.05, clock: calender",
                "alpha: 0.05 -> alpha: 0.05, better: lower",
                "{every: PT6H} -> {every: PT6H, fractions: [0.5, 1]}",
                "{every: PT6H} -> {}",
                "looks: -> futility: {}\nlooks:",
                "looks: -> split-check: {segments: [app version, platform]}\nlooks:",
                "looks: -> split-check: {segments: [a, b, c, d, e]}\nlooks:",
                ", wide: {share: 0.5}} -> }"
            })
    void refusesAsTheReaderDoes(String change) throws IOException {
        String[] parts = change.split(" -> ", -1);
        String text = PlanReaderTest.MINIMAL.replace(parts[0], parts[1]);
        assertFalse(PlanReader.parse("bad.yaml", text).problems().isEmpty(), text);
        assertFalse(takes(YAML.readTree(text)), text);
        assertTrue(takes(YAML.readTree(PlanReaderTest.MINIMAL)));
    }
}
