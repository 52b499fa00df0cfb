package io.tallyward.service.http;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.service.status.Northwater;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;

class ExperimentJsonTest {

    @Test
    void keepsItsForm() {
        assertEquals(
                """
                {
                  "experiment" : "pier-map",
                  "question" : "Does a map of the pier save calls to the desk?",
                  "owner" : "web-growth@northwater.example",
                  "planDigest" : "%s",
                  "verdict" : "waiting",
                  "trust" : "sound",
                  "trustReason" : "",
                  "completeUntil" : null,
                  "looksTaken" : 0,
                  "looksDelayed" : 1,
                  "delayReason" : "plain has 2 successes (expected: 5 or more in every variant)",
                  "counts" : [ ],
                  "outcomes" : {
                    "trial" : 0,
                    "success" : 0,
                    "repeat" : 0,
                    "expired" : 0,
                    "crossover" : 0,
                    "orphan" : 0,
                    "late" : 0,
                    "outside" : 0,
                    "duplicate" : 0
                  },
                  "split" : {
                    "logBayesFactor" : 0.0,
                    "sequentialPValue" : 1.0,
                    "pearsonChiSquare" : 0.0,
                    "pearsonDegreesOfFreedom" : 0,
                    "pearsonPValue" : 1.0,
                    "origin" : null
                  },
                  "comparisons" : [ {
                    "variant" : "map",
                    "verdict" : "waiting",
                    "held" : null,
                    "look" : null,
                    "z" : null,
                    "information" : null,
                    "informationFraction" : null,
                    "maximumInformation" : 235000.0,
                    "spendingTime" : null,
                    "level" : null,
                    "alphaSpent" : null,
                    "upper" : null,
                    "lower" : null,
                    "futility" : null,
                    "difference" : null,
                    "differenceLower" : null,
                    "differenceUpper" : null,
                    "lift" : null,
                    "outlook" : null,
                    "adjusted" : null,
                    "clustering" : null,
                    "reason" : null
                  } ],
                  "lastRecord" : "%s",
                  "history" : [ ]
                }""".formatted("5b1f".repeat(16), "c07a".repeat(16)),
                ExperimentJson.one(Northwater.pierMap()).toPrettyString().replace("\r\n", "\n"));
    }

    @Test
    void carriesTheLatestLookAndTheHistory() {
        ObjectNode node = ExperimentJson.one(Northwater.cabinUpsell());
        JsonNode comparison = node.get("comparisons").get(0);
        assertEquals("stop-benefit", comparison.get("held").textValue());
        assertEquals(5, comparison.get("look").intValue());
        assertEquals(4.2, comparison.get("z").doubleValue());
        assertEquals("mismatch", node.get("trust").textValue());
        assertEquals(
                "2026-05-06T15:00:00Z",
                Instant.parse(node.get("completeUntil").textValue()).toString());
        assertEquals(5, node.get("history").size());
        JsonNode first = node.get("history").get(0);
        assertEquals("2026-05-04T12:00:00Z", first.get("windowEnd").textValue());
        assertTrue(first.get("upper").isNull(), "a tail that spends nothing");
        assertTrue(first.get("differenceUpper").isNull(), "an unbounded interval");
    }

    @Test
    void tellsUnitsBesideViewsAndHowTheyDepend() {
        ObjectNode node = ExperimentJson.one(Northwater.boardNews());
        JsonNode count = node.get("counts").get(0);
        assertEquals(14_020, count.get("units").longValue());
        assertEquals(61_240, count.get("trials").longValue());
        JsonNode clustering = node.get("comparisons").get(0).get("clustering");
        assertEquals(-0.31, clustering.get("independentZ").doubleValue());
        assertEquals(2.4, clustering.get("designEffect").doubleValue());
        JsonNode units = ExperimentJson.one(Northwater.fareChip());
        assertEquals(22_105, units.get("counts").get(0).get("units").longValue());
        assertTrue(units.get("comparisons").get(0).get("clustering").isNull());
    }

    @Test
    void saysWhereAMismatchComesFrom() {
        JsonNode origin =
                ExperimentJson.one(Northwater.cabinUpsell()).get("split").get("origin");
        assertEquals("2026-05-05T08:00:00Z", origin.get("beganFrom").textValue());
        assertEquals("2026-05-05T08:20:00Z", origin.get("beganUntil").textValue());
        assertEquals(7_750, origin.get("since").get(1).get("units").longValue());
        JsonNode worst = origin.get("worst");
        assertEquals("platform", worst.get("field").textValue());
        assertEquals("app", worst.get("value").textValue());
        assertEquals(5_000, worst.get("units").get(1).get("units").longValue());
        assertEquals("inside", worst.get("elsewhere").get(1).get("variant").textValue());
        assertTrue(worst.get("standsOut").booleanValue());
    }

    @Test
    void listsEveryChallengerInThePlansOrder() {
        List<String> variants = new ArrayList<>();
        ExperimentJson.one(Northwater.deckMap())
                .get("comparisons")
                .forEach(entry -> variants.add(entry.get("variant").textValue()));
        assertEquals(List.of("map", "tour"), variants);
    }

    @Test
    void listsAllWithoutTheirHistory() {
        List<ExperimentView> views = List.copyOf(Northwater.all().values());
        JsonNode list = ExperimentJson.list(views);
        assertEquals(views.size(), list.size());
        list.forEach(entry -> assertFalse(entry.has("history")));
    }
}
