package io.tallyward.connector.format;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanDigest;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;

class PlanJsonTest {

    private static final int SAMPLES = 2_000;
    private static final ObjectMapper MAPPER = new ObjectMapper();

    @Test
    void readsBackThePlanItWroteWithItsDigestAndItsBytes() {
        for (int seed = 0; seed < SAMPLES; seed++) {
            Plan plan = new RandomPlans(seed).plan();
            byte[] bytes = PlanJson.write(plan);
            Plan back = PlanJson.read(bytes);
            assertEquals(plan, back, "seed " + seed);
            assertEquals(PlanDigest.of(plan), PlanDigest.of(back), "seed " + seed);
            assertArrayEquals(bytes, PlanJson.write(back), "seed " + seed);
        }
    }

    @Test
    void refusesAnyMemberMissing() throws IOException {
        for (int seed = 0; seed < 60; seed++) {
            JsonNode tree = MAPPER.readTree(PlanJson.write(new RandomPlans(seed).plan()));
            for (ObjectNode object : objects(tree)) {
                for (String name : names(object)) {
                    if (Character.isDigit(name.charAt(0))) {
                        continue;
                    }
                    JsonNode removed = object.remove(name);
                    assertThrows(RecordFormatException.class, () -> read(tree), "without " + name);
                    object.set(name, removed);
                }
            }
        }
    }

    @Test
    void refusesMembersItDoesNotKnow() throws IOException {
        for (int seed = 0; seed < 60; seed++) {
            JsonNode tree = MAPPER.readTree(PlanJson.write(new RandomPlans(seed).plan()));
            for (ObjectNode object : objects(tree)) {
                if (!object.isEmpty() && Character.isDigit(names(object).get(0).charAt(0))) {
                    continue;
                }
                object.put("unheardOf", true);
                RecordFormatException refusal = assertThrows(RecordFormatException.class, () -> read(tree));
                assertTrue(refusal.getMessage().contains("unknown member \"unheardOf\""), refusal::getMessage);
                object.remove("unheardOf");
            }
        }
    }

    @Test
    void saysWhereAndWhat() {
        String plan = new String(PlanJson.write(new RandomPlans(1).plan()), StandardCharsets.UTF_8);
        refuses(
                plan.replaceFirst("\"by\":\"[^\"]+\"", "\"by\":\"hour\""),
                "plan.count.by: \"hour\" (expected: one of unit, view)");
        refuses(
                plan.replaceFirst("\"grace\":\"[^\"]+\"", "\"grace\":\"10 minutes\""),
                "plan.count.grace: \"10 minutes\" (expected: an ISO 8601 duration, as in PT30M)");
        refuses(plan.replace("\"control\":true", "\"control\":false"), "(expected: exactly one control)");
    }

    private static void refuses(String document, String message) {
        RecordFormatException refusal = assertThrows(
                RecordFormatException.class, () -> PlanJson.read(document.getBytes(StandardCharsets.UTF_8)));
        assertTrue(refusal.getMessage().contains(message), refusal::getMessage);
    }

    private static Plan read(JsonNode tree) {
        return PlanJson.read(tree.toString().getBytes(StandardCharsets.UTF_8));
    }

    private static List<ObjectNode> objects(JsonNode tree) {
        List<ObjectNode> objects = new ArrayList<>();
        if (tree instanceof ObjectNode object) {
            objects.add(object);
        }
        tree.forEach(child -> objects.addAll(objects(child)));
        return objects;
    }

    private static List<String> names(ObjectNode object) {
        List<String> names = new ArrayList<>();
        object.fieldNames().forEachRemaining(names::add);
        return names;
    }
}
