package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.json.JsonMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.BooleanNode;
import com.fasterxml.jackson.databind.node.ContainerNode;
import com.fasterxml.jackson.databind.node.DoubleNode;
import com.fasterxml.jackson.databind.node.LongNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import com.fasterxml.jackson.databind.node.TextNode;
import io.tallyward.connector.format.DecisionJson;
import io.tallyward.connector.format.RecordFormatException;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.verify.RecordVerifier;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class VerifyCommandTest {

    private static final JsonMapper MAPPER = new JsonMapper();

    @TempDir
    Path directory;

    private List<String> log;

    @BeforeEach
    void decide() throws IOException {
        log = new ArrayList<>(DecisionLogs.quayBanner(directory));
    }

    private CommandRun verify(List<String> lines, String... options) throws IOException {
        return verifyText(String.join("\n", lines) + "\n", options);
    }

    private CommandRun verifyText(String text, String... options) throws IOException {
        Path file = Files.writeString(directory.resolve("decisions.jsonl"), text);
        List<String> arguments = new ArrayList<>(List.of("verify", file.toString()));
        arguments.addAll(List.of(options));
        return CommandRun.of(arguments.toArray(String[]::new));
    }

    @Test
    void isSatisfiedWithWhatAReplayDecided() throws IOException {
        CommandRun run = verify(log);
        assertEquals(0, run.status(), run.toString());
        assertTrue(
                run.out()
                        .get(0)
                        .matches(
                                "quay-banner: right, \\d+ records up to \\S+Z, verdict stop-benefit, data sound, plan [0-9a-f]{12}"),
                run.out().get(0));
        assertEquals(
                log.size()
                        + " records of 1 experiment: each follows from its own counts and from the records before it."
                        + " What no log can prove: that nothing was written after its last record.",
                run.out().get(1));
    }

    @Test
    void namesTheFirstRecordThatIsWrongAndHow() throws IOException {
        log.set(2, log.get(2).replaceFirst("\"z\":[0-9.]+", "\"z\":9.5"));
        CommandRun run = verify(log);
        assertEquals(1, run.status());
        assertEquals(
                "quay-banner: WRONG at record 3 (" + log.size()
                        + " records read): the record does not have the digest that it names.",
                run.out().get(0));
        assertTrue(run.out().get(1).startsWith("  hash: "), run.out().get(1));
        JsonNode object = verify(log, "--json").json().get(0);
        assertEquals(false, object.get("right").asBoolean());
        assertEquals(2, object.get("verified").asInt());
        assertEquals("hash", object.get("finding").get("kind").asText());
        assertEquals(3, object.get("finding").get("sequence").asInt());
    }

    @Test
    void saysInOneSentenceWhatIsMissing() throws IOException {
        assertEquals(
                "quay-banner: WRONG at record 2 (" + (log.size() - 1)
                        + " records read): the log begins with record 2: the plan, and what was decided before, are missing.",
                verify(log.subList(1, log.size())).out().get(0));
        String text = String.join("\n", log);
        CommandRun cut = verifyText(text.substring(0, text.length() - 30));
        assertEquals(1, cut.status());
        assertTrue(
                cut.err()
                        .get(0)
                        .endsWith("ends in the middle of a record (line " + log.size()
                                + "): copy the file again, it is not complete."),
                cut.err().toString());
        log.set(1, "{\"type\":\"decision\",\"experiment\":7}");
        CommandRun spoilt = verify(log);
        assertEquals(1, spoilt.status());
        assertTrue(
                spoilt.err().get(0).contains("line 2 is no decision record of this version"),
                spoilt.err().toString());
        assertTrue(spoilt.out().get(0).contains("record 1 is followed by record 3: 1 missing in between"));
    }

    /** As a file may be changed by hand: every leaf of every record, one at a time. */
    @Test
    void findsEveryLeafThatWasChanged() throws IOException {
        int leaves = 0;
        for (int line = 0; line < log.size(); line++) {
            JsonNode tree = MAPPER.readTree(log.get(line));
            for (ContainerNode<?> parent : containers(tree)) {
                for (String place : places(parent)) {
                    JsonNode leaf = at(parent, place);
                    if (leaf.isContainerNode()) {
                        continue;
                    }
                    put(parent, place, other(leaf));
                    List<String> changed = new ArrayList<>(log);
                    changed.set(line, tree.toString());
                    assertTrue(isFound(changed), "line " + (line + 1) + ", " + place + " in " + parent);
                    put(parent, place, leaf);
                    leaves++;
                }
            }
        }
        assertTrue(leaves > 300, "leaves: " + leaves);
    }

    private static boolean isFound(List<String> lines) {
        RecordVerifier verifier = new RecordVerifier();
        boolean found = false;
        for (String line : lines) {
            try {
                Optional<DecisionRecord> record = DecisionJson.readIfDecision(line.getBytes(StandardCharsets.UTF_8));
                found |= record.isEmpty() || verifier.take(record.get()).isPresent();
            } catch (RecordFormatException unreadable) {
                found = true;
            }
        }
        return found;
    }

    private static JsonNode other(JsonNode leaf) {
        if (leaf.isIntegralNumber()) {
            return LongNode.valueOf(leaf.longValue() + 1);
        }
        if (leaf.isNumber()) {
            return DoubleNode.valueOf(Math.nextUp(leaf.doubleValue()));
        }
        if (leaf.isBoolean()) {
            return BooleanNode.valueOf(!leaf.booleanValue());
        }
        return leaf.isNull() ? DoubleNode.valueOf(0.5) : TextNode.valueOf(leaf.textValue() + "x");
    }

    private static List<ContainerNode<?>> containers(JsonNode tree) {
        List<ContainerNode<?>> containers = new ArrayList<>();
        if (tree instanceof ContainerNode<?> container) {
            containers.add(container);
        }
        tree.forEach(child -> containers.addAll(containers(child)));
        return containers;
    }

    private static List<String> places(ContainerNode<?> parent) {
        List<String> places = new ArrayList<>();
        parent.fieldNames().forEachRemaining(places::add);
        for (int i = 0; parent.isArray() && i < parent.size(); i++) {
            places.add(String.valueOf(i));
        }
        return places;
    }

    private static JsonNode at(ContainerNode<?> parent, String place) {
        return parent.isArray() ? parent.get(Integer.parseInt(place)) : parent.get(place);
    }

    private static void put(ContainerNode<?> parent, String place, JsonNode value) {
        if (parent instanceof ArrayNode array) {
            array.set(Integer.parseInt(place), value);
        } else {
            ((ObjectNode) parent).set(place, value);
        }
    }

    @Test
    void refusesWhatHoldsNoDecision() throws IOException {
        assertEquals(2, verifyText("").status());
        assertEquals(2, verifyText("{\"type\":\"outcomes\"}\n").status());
        assertEquals(2, CommandRun.of("verify", directory.toString()).status());
        assertEquals(2, CommandRun.of("verify").status());
        assertEquals(2, CommandRun.of("verify", "--topic").status());
        assertEquals(2, CommandRun.of("verify", "--topic", "some.jsonl").status());
    }

    @Test
    void readsTheTopicOfAConfiguration() throws IOException {
        Path config = Files.writeString(
                directory.resolve("tallyward.yaml"),
                "name: harbour\nkafka: {bootstrap-servers: 'broker.northwater.example:9092'}\ninput: {topics: [page-events]}\n"
                        + "plans: " + directory.resolve("plans") + "\n");
        List<String> asked = new ArrayList<>();
        CommandRun run = CommandRun.of(
                (properties, topic, values) -> {
                    asked.add(topic + " on " + properties.get("bootstrap.servers"));
                    log.forEach(line -> values.accept(line.getBytes(StandardCharsets.UTF_8)));
                },
                "verify",
                "--topic",
                "--config",
                config.toString());
        assertEquals(0, run.status(), run.toString());
        assertEquals(List.of("harbour-decisions on broker.northwater.example:9092"), asked);
    }

    @Test
    void printsTheSchemas() {
        for (String name : List.of("event", "decision", "notice")) {
            CommandRun run = CommandRun.of("schema", name);
            assertEquals(0, run.status());
            assertTrue(String.join("", run.out()).contains("urn:tallyward:schema:" + name), name);
        }
        assertEquals(2, CommandRun.of("schema", "tally").status());
    }
}
