package io.tallyward.demo.check;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.check.MonitorApi.Standing;
import io.tallyward.demo.receiver.ReceivedNotice;
import io.tallyward.demo.story.CabinUpsell;
import io.tallyward.demo.story.FareChip;
import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.QuayBanner;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.truth.Cell;
import io.tallyward.demo.truth.Count;
import io.tallyward.demo.truth.ExperimentTruth;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;

class ReportTest {

    private static final long START = Northwater.START.toEpochMilli();
    private static final ReceivedNotice STOP =
            new ReceivedNotice("n1", "stop", "page", "quay-banner", "wide", "", "wide does better", "decide");

    private final ObjectMapper json = new ObjectMapper();

    @Test
    void saysThatAllHoldsWhenItDoes() {
        Report report = new Report(List.of(quayBanner("stop-benefit", 10, List.of(STOP))), List.of());
        assertTrue(report.holds(), () -> String.join("\n", report.lines()));
        assertEquals("all 7 checks hold", last(report));
        assertTrue(
                report.lines().get(2).contains("stop-benefit"), report.lines().get(2));
    }

    @Test
    void showsHowManyWindowCountsThereAreAndHowManyAreWrong() {
        assertEquals(List.of("1", "0"), windowCounts(quayBanner("stop-benefit", 10, List.of(STOP))));
        assertEquals(List.of("1", "1"), windowCounts(quayBanner("stop-benefit", 11, List.of(STOP))));
    }

    private static List<String> windowCounts(ExperimentCheck check) {
        List<String> lines = new Report(List.of(check), List.of()).lines();
        List<String> headings = List.of(lines.get(0).split(" {2,}"));
        int column = headings.indexOf("window counts");
        assertEquals("wrong", headings.get(column + 1));
        return List.of(lines.get(2).split(" {2,}")).subList(column, column + 2);
    }

    @Test
    void namesAWindowThatDiffers() {
        Report report = new Report(List.of(quayBanner("stop-benefit", 11, List.of(STOP))), List.of());
        assertFalse(report.holds());
        assertTrue(report.lines().contains("differs: quay-banner: trials and successes by window"));
        assertTrue(report.lines().stream().anyMatch(line -> line.contains("trials=10") && line.contains("trials=11")));
    }

    @Test
    void namesAWrongVerdictAndAMissingNotice() {
        Report report = new Report(List.of(quayBanner("continue", 10, List.of())), List.of());
        assertEquals("2 of 7 checks do not hold", last(report));
        assertTrue(report.lines().contains("    right is stop-benefit, the monitor says continue"));
    }

    @Test
    void showsWhereAMismatchComesFromAndNamesAWrongOrigin() {
        String right = "right is 2026-05-06T00:00:00Z with version 6.3, the monitor says ";
        assertEquals(List.of(), differences(origin("2026-05-06T05:20:00Z", "version", "6.3", true), "version 6.3"));
        assertEquals(
                List.of("segment of the mismatch", "segment in the notice"),
                differences(origin("2026-05-05T23:20:00Z", "platform", "ios", true), "platform ios"));
        assertEquals(
                List.of("segment of the mismatch"),
                differences(origin("2026-05-05T23:20:00Z", "version", "6.3", false), "version 6.3"));
        assertEquals(
                List.of("beginning of the mismatch"),
                differences(origin("2026-05-06T06:00:01Z", "version", "6.3", true), "version 6.3"));
        assertEquals(
                List.of("beginning of the mismatch"),
                differences(origin("2026-05-05T17:19:59Z", "version", "6.3", true), "version 6.3"));
        assertEquals(
                List.of("segment of the mismatch", "beginning of the mismatch"), differences("null", "version 6.3"));
        ExperimentCheck check = cabinUpsell(origin("2026-05-05T23:20:00Z", "platform", "ios", true), "");
        assertTrue(new Report(List.of(check), List.of())
                .lines()
                .contains("    " + right + "between 2026-05-05T23:20:00Z and 2026-05-06T00:00:00Z with platform"
                        + " ios"));
        assertEquals(
                "cabin-upsell: the mismatch began at 2026-05-06T00:00:00Z with version 6.3; the monitor says between"
                        + " 2026-05-05T23:20:00Z and 2026-05-06T00:00:00Z with platform ios",
                check.origins().orElseThrow());
    }

    private static String origin(String from, String field, String value, boolean standsOut) {
        return """
                {"beganFrom": "%s", "beganUntil": "%s",
                 "worst": {"field": "%s", "value": "%s", "standsOut": %b}}""".formatted(from, Instant.parse(from).plus(Duration.ofMinutes(40)), field, value, standsOut);
    }

    private ExperimentCheck cabinUpsell(String origin, String named) {
        Story story = new CabinUpsell();
        ExperimentTruth truth = new ExperimentTruth(story, Map.of(), Map.of("outside", 0L, "trial", 0L));
        ReceivedNotice notice = new ReceivedNotice(
                "n2", "mismatch", "page", "cabin-upsell", "", "", "a mismatch, with " + named, "find where");
        ObjectNode node = (ObjectNode) standing(story, "continue", 0).node();
        node.put("trust", "mismatch");
        try {
            node.putObject("split").set("origin", json.readTree(origin));
        } catch (IOException e) {
            throw new UncheckedIOException(e);
        }
        return new ExperimentCheck(truth, new Standing(node), new MonitorCounts(), 0, List.of(notice));
    }

    /** What differs, without the experiment. */
    private List<String> differences(String origin, String named) {
        return cabinUpsell(origin, named).findings().stream()
                .filter(finding -> !finding.holds())
                .map(finding -> finding.subject().replace("cabin-upsell: ", ""))
                .toList();
    }

    @Test
    void callsAFalseAlarmByItsName() {
        ExperimentTruth truth = new ExperimentTruth(new FareChip(), Map.of(), Map.of("outside", 0L, "trial", 0L));
        ExperimentCheck check = new ExperimentCheck(
                truth, standing(new FareChip(), "stop-benefit", 0), new MonitorCounts(), 0, List.of());
        Report report = new Report(List.of(check), List.of());
        assertTrue(report.holds(), () -> String.join("\n", report.lines()));
        assertTrue(report.lines().stream().anyMatch(line -> line.contains("false alarm")));
    }

    @Test
    void everyRefusedSignatureIsADifference() {
        assertTrue(Report.signatures(List.of()).holds());
        assertFalse(Report.signatures(List.of("no signature fits")).holds());
    }

    private ExperimentCheck quayBanner(String verdict, long counted, List<ReceivedNotice> notices) {
        Story story = new QuayBanner();
        Map<Cell, Count> cells = Map.of(new Cell(2, START, 0, 1), new Count(10, 3));
        ExperimentTruth truth =
                new ExperimentTruth(story, cells, Map.of("trial", 10L, "success", 3L, "outside", 4L, "late", 0L));
        MonitorCounts counts = new MonitorCounts();
        counts.add(tally(counted));
        return new ExperimentCheck(truth, standing(story, verdict, 10), counts, 4, notices);
    }

    private static byte[] tally(long trials) {
        return """
                {"experiment":"quay-banner","planDigest":"d","partition":2,"partitions":4,"sealedUntilMillis":0,
                 "cause":"watermark","windows":[{"startMillis":%d,
                  "cells":[{"epoch":0,"variant":1,"trials":%d,"successes":3}],
                  "outcomes":{"trial":10,"success":3,"late":0}}]}""".formatted(START, trials).getBytes(StandardCharsets.UTF_8);
    }

    private Standing standing(Story story, String verdict, long trials) {
        ObjectNode node = json.createObjectNode();
        node.put("experiment", story.experiment())
                .put("verdict", verdict)
                .put("trust", "sound")
                .put("completeUntil", "2026-05-18T00:00:00Z");
        node.putArray("counts")
                .addObject()
                .put("epoch", 0)
                .put("variant", story.variants().get(1))
                .put("trials", trials)
                .put("successes", trials == 0 ? 0 : 3);
        node.putArray("comparisons")
                .addObject()
                .put("variant", story.variants().get(1))
                .put("verdict", verdict)
                .put("z", 5.09);
        return new Standing(node);
    }

    private static String last(Report report) {
        return report.lines().get(report.lines().size() - 1);
    }
}
