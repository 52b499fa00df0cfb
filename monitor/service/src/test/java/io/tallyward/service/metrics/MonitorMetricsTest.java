package io.tallyward.service.metrics;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.CountReport.ExperimentCount;
import io.tallyward.service.status.Northwater;
import io.tallyward.service.status.RunnerReport;
import io.tallyward.service.status.StatusBoard;
import io.tallyward.service.status.WebhookReport;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalDouble;
import java.util.OptionalLong;
import java.util.TreeSet;
import java.util.stream.Collectors;
import org.junit.jupiter.api.Test;

class MonitorMetricsTest {

    private final StatusBoard board = new StatusBoard();

    @Test
    void keepsNamesTypesAndLabels() {
        publishEverything();
        String text = exposition(board).text();
        String names = text
                .lines()
                .filter(line -> line.startsWith("tallyward_"))
                .map(line -> line.replaceAll("=\"[^\"]*\"", "").replaceAll(",?}? [^ ]*$", "}"))
                .map(line -> line.contains("{") ? line : line.replace("}", ""))
                .collect(Collectors.toCollection(TreeSet::new))
                .stream()
                .collect(Collectors.joining("\n"));
        assertEquals("""
                tallyward_aborts_total{group}
                tallyward_adjusted_difference_lower{experiment,variant}
                tallyward_adjusted_difference_upper{experiment,variant}
                tallyward_adjusted_difference{experiment,variant}
                tallyward_alpha_spent_ratio{experiment,variant}
                tallyward_boundary_futility{experiment,variant}
                tallyward_boundary_lower{experiment,variant}
                tallyward_boundary_upper{experiment,variant}
                tallyward_broker_reached{group}
                tallyward_build_info{version}
                tallyward_commits_total{group}
                tallyward_comparison_verdict{experiment,variant,state}
                tallyward_complete_until_timestamp_seconds{experiment}
                tallyward_difference_lower{experiment,variant}
                tallyward_difference_upper{experiment,variant}
                tallyward_difference{experiment,variant}
                tallyward_events_open{experiment}
                tallyward_events_total{experiment,outcome}
                tallyward_held{experiment}
                tallyward_information_fraction{experiment,variant}
                tallyward_ledger_units{partition}
                tallyward_looks_delayed_total{experiment}
                tallyward_looks_total{experiment}
                tallyward_plan_troubles
                tallyward_predictive_power{experiment,variant}
                tallyward_rejected_total{reason}
                tallyward_restore_duration_seconds{group}
                tallyward_restore_remaining_records{group}
                tallyward_restore_waiting_partitions{group}
                tallyward_split_p_value{experiment}
                tallyward_successes{experiment,variant}
                tallyward_topic_keyed_by_unit
                tallyward_trials{experiment,variant}
                tallyward_trust{experiment,state}
                tallyward_units{experiment,variant}
                tallyward_variants_unpublished
                tallyward_verdict{experiment,state}
                tallyward_watermark_timestamp_seconds{partition}
                tallyward_webhook_attempts_total
                tallyward_webhook_failures_total
                tallyward_webhook_oldest_pending_age_seconds
                tallyward_webhook_parked
                tallyward_webhook_pending
                tallyward_z{experiment,variant}""", names);
        assertTrue(text.contains("# TYPE tallyward_events_total counter"));
        assertTrue(text.contains("# TYPE tallyward_z gauge"));
        assertFalse(text.contains("_created"));
    }

    @Test
    void tellsStatesAsOneSeriesEach() {
        board.publishExperiments(0, Map.of("quay-banner", Northwater.quayBanner()));
        List<String> lines = exposition(board)
                .text()
                .lines()
                .filter(line -> line.startsWith("tallyward_verdict{") || line.startsWith("tallyward_trust{"))
                .toList();
        assertEquals(
                List.of(
                        "tallyward_verdict{experiment=\"quay-banner\",state=\"waiting\",} 0.0",
                        "tallyward_verdict{experiment=\"quay-banner\",state=\"continue\",} 0.0",
                        "tallyward_verdict{experiment=\"quay-banner\",state=\"stop-benefit\",} 1.0",
                        "tallyward_verdict{experiment=\"quay-banner\",state=\"stop-harm\",} 0.0",
                        "tallyward_verdict{experiment=\"quay-banner\",state=\"stop-futility\",} 0.0",
                        "tallyward_verdict{experiment=\"quay-banner\",state=\"exhausted\",} 0.0",
                        "tallyward_verdict{experiment=\"quay-banner\",state=\"stopped\",} 0.0",
                        "tallyward_trust{experiment=\"quay-banner\",state=\"mismatch\",} 0.0",
                        "tallyward_trust{experiment=\"quay-banner\",state=\"crossover\",} 0.0",
                        "tallyward_trust{experiment=\"quay-banner\",state=\"orphans\",} 0.0",
                        "tallyward_trust{experiment=\"quay-banner\",state=\"starved\",} 0.0",
                        "tallyward_trust{experiment=\"quay-banner\",state=\"late\",} 0.0",
                        "tallyward_trust{experiment=\"quay-banner\",state=\"sound\",} 1.0"),
                lines);
    }

    @Test
    void leavesOutWhatDoesNotExistYet() {
        board.publishExperiments(0, Map.of("pier-map", Northwater.pierMap()));
        String text = exposition(board).text();
        assertFalse(text.contains("tallyward_z{"));
        assertFalse(text.contains("tallyward_boundary"));
        assertFalse(text.contains("tallyward_split_p_value"));
        assertFalse(text.contains("tallyward_complete_until"));
        assertFalse(text.contains("tallyward_topic_keyed_by_unit"));
        assertFalse(text.contains("NaN"));
        assertTrue(text.contains("tallyward_events_total{experiment=\"pier-map\",outcome=\"trial\",} 0.0"));
        assertTrue(text.contains("tallyward_rejected_total{reason=\"bad-time\",} 0.0"));
        assertTrue(text.contains("tallyward_trials{experiment=\"pier-map\",variant=\"map\",} 0.0"));
    }

    @Test
    void tellsUnitsAndTheDesignEffectWhereViewsAreCounted() {
        board.publishExperiments(0, Map.of("board-news", Northwater.boardNews(), "fare-chip", Northwater.fareChip()));
        String text = exposition(board).text();
        assertTrue(text.contains("tallyward_units{experiment=\"board-news\",variant=\"long\",} 14105.0"));
        assertTrue(text.contains("tallyward_trials{experiment=\"board-news\",variant=\"long\",} 60987.0"));
        assertTrue(text.contains("tallyward_design_effect{experiment=\"board-news\",variant=\"long\",} 2.4"));
        assertTrue(text.contains("tallyward_units{experiment=\"fare-chip\",variant=\"chip\",} 22240.0"));
        assertFalse(text.contains("tallyward_design_effect{experiment=\"fare-chip\""));
    }

    @Test
    void leavesOutATailThatSpendsNothing() {
        ExperimentView view = Northwater.returnPrompt();
        board.publishExperiments(0, Map.of("return-prompt", view));
        assertTrue(exposition(board).text().contains("tallyward_boundary_lower{experiment=\"return-prompt\""));
        board.publishExperiments(0, Map.of());
        assertFalse(exposition(board).text().contains("return-prompt"));
    }

    @Test
    void adjustsOnceAVerdictIsFinal() {
        board.publishExperiments(0, Map.of("deck-map", Northwater.deckMapPassedOn()));
        String text = exposition(board).text();
        String ended = "{experiment=\"deck-map\",variant=\"map\",} ";
        String open = "{experiment=\"deck-map\",variant=\"tour\",} ";
        for (String end : List.of("", "_lower", "_upper")) {
            assertTrue(text.contains("tallyward_adjusted_difference" + end + ended), end);
            assertFalse(text.contains("tallyward_adjusted_difference" + end + open), end);
        }
        assertTrue(text.contains("tallyward_predictive_power" + open + "0.02"));
        assertFalse(text.contains("tallyward_predictive_power" + ended));
    }

    /** As the page does: what is not trusted has no outlook. */
    @Test
    void keepsTheOutlookBackWhileTheDataAreNotTrusted() {
        board.publishExperiments(
                0, Map.of("deck-map", Northwater.with(Northwater.deckMapPassedOn(), Verdict.CONTINUE, Trust.LATE)));
        assertFalse(exposition(board).text().contains("tallyward_predictive_power{"));
    }

    @Test
    void keepsTheEstimatesOfAHeldVerdictBack() {
        board.publishExperiments(0, Map.of("cabin-upsell", Northwater.cabinUpsell()));
        assertFalse(exposition(board).text().contains("tallyward_adjusted_difference"));
    }

    @Test
    void forgetsAnExperimentThatLeft() {
        board.publishExperiments(3, Map.of("deck-map", Northwater.deckMap()));
        MonitorMetrics metrics = metrics(board);
        assertTrue(new PrometheusExposition(metrics).text().contains("deck-map"));
        board.withdrawDecide(3);
        assertFalse(new PrometheusExposition(metrics).text().contains("deck-map"));
    }

    @Test
    void addsVariantsOverEpochs() {
        board.publishExperiments(0, Map.of("deck-map", Northwater.deckMap()));
        String text = exposition(board).text();
        assertTrue(text.contains("tallyward_trials{experiment=\"deck-map\",variant=\"map\",} 10131.0"));
        assertTrue(text.contains("tallyward_successes{experiment=\"deck-map\",variant=\"map\",} 1374.0"));
    }

    @Test
    void saysHowManyVariantsDoNotFit() {
        Map<String, ExperimentView> many = new LinkedHashMap<>();
        for (int i = 0; i < MonitorMetrics.MAXIMUM_VARIANTS / 2 + 3; i++) {
            many.put("quay-banner-%04d".formatted(i), Northwater.quayBanner());
        }
        board.publishExperiments(0, many);
        String text = exposition(board).text();
        assertTrue(text.contains("tallyward_variants_unpublished 6.0"));
        assertEquals(
                MonitorMetrics.MAXIMUM_VARIANTS,
                text.lines()
                        .filter(line -> line.startsWith("tallyward_trials{"))
                        .count());
        assertTrue(text.contains("tallyward_verdict{experiment=\"quay-banner-1002\""), "verdicts are never left out");
    }

    @Test
    void escapesLabelValues() {
        String text = new PrometheusExposition(
                        new MonitorMetrics(board, List::of, () -> 0, Optional::empty, "1.0\"\n\\x"))
                .text();
        assertTrue(text.contains("tallyward_build_info{version=\"1.0\\\"\\n\\\\x\",} 1.0"));
    }

    private void publishEverything() {
        board.publishExperiments(0, Northwater.all());
        board.publishCounts(
                0,
                new CountReport(
                        Map.of("quay-banner", new ExperimentCount(OutcomeCounts.of(9, 8, 7, 6, 5, 4, 3, 2, 1), 4)),
                        OptionalLong.of(Northwater.START.toEpochMilli()),
                        Map.of(RejectReason.BAD_TIME, 2L),
                        1_234,
                        false));
    }

    static MonitorMetrics metrics(StatusBoard board) {
        return new MonitorMetrics(
                board,
                () -> List.of(new RunnerReport("count", 10, 1, OptionalDouble.of(2.5), 2, 400, true)),
                () -> 2,
                () -> Optional.of(new WebhookReport(5, 2, 1, OptionalDouble.of(30), 0)),
                "0.1.0");
    }

    static PrometheusExposition exposition(StatusBoard board) {
        return new PrometheusExposition(metrics(board));
    }
}
