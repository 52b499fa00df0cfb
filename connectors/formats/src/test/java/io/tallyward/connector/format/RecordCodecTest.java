package io.tallyward.connector.format;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.function.Function;
import java.util.function.UnaryOperator;
import org.junit.jupiter.api.Test;

class RecordCodecTest {

    private static final int SAMPLES = 500;
    private static final ObjectMapper MAPPER = new ObjectMapper();

    @Test
    void readsBackTheTallyItWrote() {
        for (int seed = 0; seed < SAMPLES; seed++) {
            TallyUpdate tally = new RandomRecords(seed).tally();
            assertEquals(tally, TallyJson.read(TallyJson.write(tally)), "seed " + seed);
        }
    }

    @Test
    void readsBackTheDecisionItWrote() {
        for (int seed = 0; seed < SAMPLES; seed++) {
            DecisionRecord decision = new RandomRecords(seed).decision();
            assertEquals(decision, DecisionJson.read(DecisionJson.write(decision)), "seed " + seed);
        }
    }

    @Test
    void readsBackTheNoticeItWroteWithItsFactsInOrder() {
        for (int seed = 0; seed < SAMPLES; seed++) {
            Notice notice = new RandomRecords(seed).notice();
            Notice back = NoticeJson.read(NoticeJson.write(notice));
            assertEquals(notice, back, "seed " + seed);
            assertEquals(
                    List.copyOf(notice.facts().keySet()),
                    List.copyOf(back.facts().keySet()),
                    "seed " + seed);
        }
    }

    @Test
    void writesTalliesInTheAgreedForm() {
        WindowTally window = new WindowTally(
                1_777_852_800_000L,
                List.of(WindowTally.Cell.ofUnits(0, 1, 12, 3)),
                OutcomeCounts.of(12, 3, 1, 0, 0, 0, 0, 0, 0));
        TallyUpdate tally =
                new TallyUpdate("quay-banner", "ab", 1, 4, 1_777_853_100_000L, SealCause.WATERMARK, List.of(window));
        assertEquals(
                "{\"experiment\":\"quay-banner\",\"planDigest\":\"ab\",\"partition\":1,\"partitions\":4,"
                        + "\"sealedUntilMillis\":1777853100000,\"cause\":\"watermark\",\"windows\":["
                        + "{\"startMillis\":1777852800000,"
                        + "\"cells\":[{\"epoch\":0,\"variant\":1,\"trials\":12,\"successes\":3,\"clusters\":null}],\"segments\":[],"
                        + "\"outcomes\":{\"trial\":12,\"success\":3,\"repeat\":1,\"expired\":0,\"crossover\":0,"
                        + "\"orphan\":0,\"late\":0,\"outside\":0,\"duplicate\":0,\"orphanByVariant\":[]}}]}",
                text(TallyJson.write(tally)));
    }

    @Test
    void writesDecisionsInTheAgreedForm() {
        DecisionRecord decision = decision(0.25, List.of());
        assertEquals(
                "{\"type\":\"decision\",\"experiment\":\"quay-banner\",\"sequence\":1,\"occasion\":\"trust\","
                        + "\"windowEnd\":\"2026-05-04T06:00:00Z\",\"planDigest\":\"ab\",\"plan\":null,\"amendment\":null,\"counts\":[],"
                        + "\"outcomes\":{\"trial\":0,\"success\":0,\"repeat\":0,\"expired\":0,\"crossover\":0,"
                        + "\"orphan\":0,\"late\":0,\"outside\":0,\"duplicate\":0,\"orphanByVariant\":[]},\"idleSealed\":0,"
                        + "\"split\":{\"logBayesFactor\":0.25,\"sequentialPValue\":1.0,\"pearsonChiSquare\":0.0,"
                        + "\"pearsonDegreesOfFreedom\":0,\"pearsonPValue\":1.0,\"peak\":null,\"origin\":null},\"trust\":\"sound\","
                        + "\"trustReason\":\"\",\"silence\":null,\"verdict\":\"stop-benefit\",\"comparisons\":[],"
                        + "\"engineVersion\":\"1\",\"previous\":\"" + DecisionRecord.NO_PREVIOUS
                        + "\",\"hash\":\"cd\"}",
                text(DecisionJson.write(decision)));
    }

    @Test
    void writesNoticesInTheAgreedForm() {
        Notice notice = new Notice(
                "n_1",
                Notice.Kind.STARVED,
                Notice.Severity.TICKET,
                "fare-chip",
                "",
                Instant.parse("2026-05-04T06:00:00.5Z"),
                "No trial of any variant.",
                Map.of("events", "12"),
                "Check the topic.",
                "ab");
        assertEquals(
                "{\"id\":\"n_1\",\"kind\":\"starved\",\"severity\":\"ticket\",\"experiment\":\"fare-chip\","
                        + "\"variant\":\"\",\"at\":\"2026-05-04T06:00:00.500Z\",\"summary\":\"No trial of any variant.\","
                        + "\"facts\":{\"events\":\"12\"},\"action\":\"Check the topic.\",\"decision\":\"ab\"}",
                text(NoticeJson.write(notice)));
    }

    @Test
    void refusesToWriteWhatJsonCannotHold() {
        for (double value : new double[] {Double.NaN, Double.POSITIVE_INFINITY, Double.NEGATIVE_INFINITY}) {
            assertThrows(IllegalArgumentException.class, () -> DecisionJson.write(decision(value, List.of())));
        }
    }

    @Test
    void refusesRecordsWithAnyMemberMissing() throws IOException {
        for (int seed = 0; seed < 40; seed++) {
            RandomRecords random = new RandomRecords(seed);
            refusesEachMissing(TallyJson.write(random.tally()), TallyJson::read);
            refusesEachMissing(DecisionJson.write(random.decision()), DecisionJson::read);
            refusesEachMissing(NoticeJson.write(random.notice()), NoticeJson::read);
        }
    }

    /** A digest would not cover them. The names in planned shares are those of variants, here beginning with a digit. */
    @Test
    void refusesMembersOfADecisionItDoesNotKnow() throws IOException {
        for (int seed = 0; seed < 40; seed++) {
            JsonNode tree = MAPPER.readTree(DecisionJson.write(new RandomRecords(seed).decision()));
            for (ObjectNode object : objects(tree)) {
                if (!object.isEmpty() && Character.isDigit(names(object).get(0).charAt(0))) {
                    continue;
                }
                object.put("sinceTheNextVersion", true);
                byte[] bytes = MAPPER.writeValueAsBytes(tree);
                RecordFormatException refusal =
                        assertThrows(RecordFormatException.class, () -> DecisionJson.read(bytes), "seed " + seed);
                assertTrue(refusal.getMessage().contains("unknown member"), refusal::getMessage);
                object.remove("sinceTheNextVersion");
            }
        }
    }

    @Test
    void saysWhereARecordIsDamaged() {
        assertEquals(
                "decision.split.pearsonPValue: \"low\" (expected: a finite number)",
                complaint(json -> json.replace("\"pearsonPValue\":1.0", "\"pearsonPValue\":\"low\"")));
        assertEquals(
                "decision.verdict: \"stop\" (expected: one of waiting, continue, stop-benefit, stop-harm,"
                        + " stop-futility, exhausted, stopped)",
                complaint(json -> json.replace("stop-benefit", "stop")));
        assertEquals(
                "decision.windowEnd: \"noon\" (expected: an RFC 3339 time)",
                complaint(json -> json.replace("2026-05-04T06:00:00Z", "noon")));
        assertEquals(
                "decision.sequence: 1.5 (expected: a whole number of at most 32 bits)",
                complaint(json -> json.replace("\"sequence\":1,", "\"sequence\":1.5,")));
        assertEquals(
                "decision.split.logBayesFactor: Infinity (expected: a finite number)",
                complaint(json -> json.replace("\"logBayesFactor\":0.25", "\"logBayesFactor\":1e999")));
        assertEquals(
                "decision.comparisons[0]: null (expected: an object)",
                complaint(json -> json.replace("\"comparisons\":[]", "\"comparisons\":[null]")));
        assertEquals(
                "decision.type: \"tally\" (expected: decision)",
                complaint(json -> json.replace("\"type\":\"decision\"", "\"type\":\"tally\"")));
        assertTrue(complaint(json -> json + "{}").startsWith("decision: not JSON"));
        assertTrue(complaint(json -> json.replace("{\"type\"", "{\"hash\":\"x\",\"type\""))
                .startsWith("decision: not JSON"));
    }

    @Test
    void refusesTalliesThatContradictThemselves() {
        String json = "{\"experiment\":\"a\",\"planDigest\":\"b\",\"partition\":4,\"partitions\":4,"
                + "\"sealedUntilMillis\":0,\"cause\":\"idle\",\"windows\":[]}";
        RecordFormatException refusal =
                assertThrows(RecordFormatException.class, () -> TallyJson.read(json.getBytes(StandardCharsets.UTF_8)));
        assertEquals("tally: partition: 4 (expected: 0 to 3)", refusal.getMessage());
    }

    private static String complaint(UnaryOperator<String> damage) {
        String damaged = damage.apply(text(DecisionJson.write(decision(0.25, List.of()))));
        return assertThrows(
                        RecordFormatException.class, () -> DecisionJson.read(damaged.getBytes(StandardCharsets.UTF_8)))
                .getMessage();
    }

    private static void refusesEachMissing(byte[] bytes, Function<byte[], ?> reader) throws IOException {
        JsonNode tree = MAPPER.readTree(bytes);
        for (ObjectNode object : objects(tree)) {
            for (String name : names(object)) {
                if (object == tree.get("facts") || Character.isDigit(name.charAt(0))) {
                    continue;
                }
                JsonNode removed = object.remove(name);
                byte[] holed = MAPPER.writeValueAsBytes(tree);
                assertThrows(RecordFormatException.class, () -> reader.apply(holed), "without " + name);
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

    private static List<String> names(ObjectNode object) {
        List<String> names = new ArrayList<>();
        object.fieldNames().forEachRemaining(names::add);
        return names;
    }

    private static DecisionRecord decision(double logBayesFactor, List<DecisionRecord.Comparison> comparisons) {
        return new DecisionRecord(
                "quay-banner",
                1,
                Occasion.TRUST,
                Instant.parse("2026-05-04T06:00:00Z"),
                "ab",
                List.of(),
                OutcomeCounts.NONE,
                0,
                new Split(logBayesFactor, 1, 0, 0, 1),
                Trust.SOUND,
                "",
                Verdict.STOP_BENEFIT,
                comparisons,
                "1",
                DecisionRecord.NO_PREVIOUS,
                "cd");
    }

    private static String text(byte[] bytes) {
        return new String(bytes, StandardCharsets.UTF_8);
    }
}
