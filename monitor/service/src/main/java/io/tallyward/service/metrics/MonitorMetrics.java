package io.tallyward.service.metrics;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.RunnerReport;
import io.tallyward.service.status.StatusBoard;
import io.tallyward.service.status.StatusBoard.Counted;
import io.tallyward.service.status.StatusBoard.EventKey;
import io.tallyward.service.status.WebhookReport;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;
import java.util.function.IntSupplier;
import java.util.function.Supplier;

/**
 * Reads the values of every metric from the snapshots that are published when a scrape asks. Nothing is kept between two
 * scrapes. Thread-safe as far as the suppliers are.
 */
public final class MonitorMetrics {

    /**
     * How many variants are published at most, counted over all experiments. Chosen so that a scrape stays below about
     * 60,000 series: a variant has up to 21 of its own, and an experiment, which has two variants at least, up to 26.
     */
    static final int MAXIMUM_VARIANTS = 2_000;

    private final StatusBoard board;
    private final Supplier<List<RunnerReport>> runners;
    private final IntSupplier planTroubles;
    private final Supplier<Optional<WebhookReport>> webhook;
    private final String version;

    /**
     * @param board the snapshots
     * @param runners what each group of shards has done
     * @param planTroubles how many plan files cannot be used, or hold a plan that was refused
     * @param webhook how the delivery of notices stands; empty when none is configured
     * @param version version of the program
     */
    public MonitorMetrics(
            StatusBoard board,
            Supplier<List<RunnerReport>> runners,
            IntSupplier planTroubles,
            Supplier<Optional<WebhookReport>> webhook,
            String version) {
        this.board = board;
        this.runners = runners;
        this.planTroubles = planTroubles;
        this.webhook = webhook;
        this.version = version;
    }

    List<MetricFamily> families() {
        Sheet sheet = new Sheet();
        sheet.putState(Metric.BUILD_INFO, true, version);
        Map<String, ExperimentView> experiments = board.experiments();
        counted(sheet, board.counts(), experiments);
        int room = MAXIMUM_VARIANTS;
        int unpublished = 0;
        for (Map.Entry<String, ExperimentView> entry : experiments.entrySet()) {
            ExperimentView view = entry.getValue();
            experiment(sheet, entry.getKey(), view);
            int variants = view.plan().variants().size();
            if (variants > room) {
                unpublished += variants;
            } else {
                room -= variants;
                variants(sheet, entry.getKey(), view);
            }
        }
        sheet.put(Metric.VARIANTS_UNPUBLISHED, unpublished);
        runners.get().forEach(report -> runner(sheet, report));
        sheet.put(Metric.PLAN_TROUBLES, planTroubles.getAsInt());
        webhook.get().ifPresent(report -> webhook(sheet, report));
        return sheet.families();
    }

    private static void counted(Sheet sheet, Counted counted, Map<String, ExperimentView> experiments) {
        Map<String, Long> open = new TreeMap<>();
        counted.reports().forEach((partition, report) -> {
            String label = Integer.toString(partition);
            report.watermarkMillis().ifPresent(millis -> sheet.put(Metric.WATERMARK, millis / 1000.0, label));
            sheet.put(Metric.LEDGER_UNITS, report.ledgerUnits(), label);
            report.experiments().forEach((name, count) -> open.merge(name, count.open(), Long::sum));
        });
        open.forEach((name, events) -> sheet.put(Metric.EVENTS_OPEN, events, name));
        if (!counted.reports().isEmpty()) {
            sheet.putState(Metric.KEYED, counted.reports().values().stream().noneMatch(CountReport::unkeyed));
        }
        Set<String> names = new TreeSet<>(experiments.keySet());
        counted.events().keySet().forEach(key -> names.add(key.experiment()));
        for (String name : names) {
            for (Outcome outcome : Outcome.values()) {
                long events = counted.events().getOrDefault(new EventKey(name, outcome), 0L);
                sheet.put(Metric.EVENTS, events, name, outcome.code());
            }
        }
        for (RejectReason reason : RejectReason.values()) {
            sheet.put(Metric.REJECTED, counted.rejected().getOrDefault(reason, 0L), reason.code());
        }
    }

    private static void experiment(Sheet sheet, String name, ExperimentView view) {
        view.completeUntil().ifPresent(end -> sheet.put(Metric.COMPLETE_UNTIL, end.toEpochMilli() / 1000.0, name));
        sheet.put(Metric.LOOKS, view.looksTaken(), name);
        sheet.put(Metric.LOOKS_DELAYED, view.looksDelayed(), name);
        for (Verdict verdict : Verdict.values()) {
            sheet.putState(Metric.VERDICT, verdict == view.verdict(), name, verdict.code());
        }
        for (Trust trust : Trust.values()) {
            sheet.putState(Metric.TRUST, trust == view.trust(), name, trust.code());
        }
        sheet.putState(Metric.HELD, !view.held().isEmpty(), name);
        if (view.counts().stream().anyMatch(count -> count.trials() > 0)) {
            sheet.put(Metric.SPLIT_P_VALUE, view.split().sequentialPValue(), name);
        }
    }

    private static void variants(Sheet sheet, String name, ExperimentView view) {
        for (Variant variant : view.plan().variants()) {
            long units = 0;
            long trials = 0;
            long successes = 0;
            for (VariantCount count : view.counts()) {
                if (count.variant().equals(variant.name())) {
                    units += count.units();
                    trials += count.trials();
                    successes += count.successes();
                }
            }
            sheet.put(Metric.UNITS, units, name, variant.name());
            sheet.put(Metric.TRIALS, trials, name, variant.name());
            sheet.put(Metric.SUCCESSES, successes, name, variant.name());
        }
        for (Variant challenger : view.plan().challengers()) {
            Verdict told = view.verdicts().getOrDefault(challenger.name(), Verdict.WAITING);
            for (Verdict verdict : Verdict.values()) {
                sheet.putState(Metric.COMPARISON_VERDICT, verdict == told, name, challenger.name(), verdict.code());
            }
            Comparison look = view.comparisons().get(challenger.name());
            if (look != null) {
                comparison(sheet, look, view.trust() == Trust.SOUND, name, challenger.name());
            }
        }
    }

    private static void comparison(Sheet sheet, Comparison look, boolean sound, String... labels) {
        sheet.put(Metric.Z, look.z(), labels);
        sheet.putPresent(Metric.BOUNDARY_UPPER, look.upper(), labels);
        sheet.putPresent(Metric.BOUNDARY_LOWER, look.lower(), labels);
        sheet.putPresent(Metric.BOUNDARY_FUTILITY, look.futility(), labels);
        sheet.put(Metric.INFORMATION_FRACTION, look.informationFraction(), labels);
        sheet.put(Metric.ALPHA_SPENT, look.alphaSpent(), labels);
        sheet.put(Metric.DIFFERENCE, look.difference(), labels);
        sheet.putPresent(Metric.DIFFERENCE_LOWER, look.differenceLower(), labels);
        sheet.putPresent(Metric.DIFFERENCE_UPPER, look.differenceUpper(), labels);
        if (look.clustering() != null) {
            sheet.put(Metric.DESIGN_EFFECT, look.clustering().designEffect(), labels);
        }
        if (look.outlook() != null && sound) {
            sheet.put(Metric.PREDICTIVE_POWER, look.outlook().predictive(), labels);
        }
        if (look.adjusted() != null && look.held() == null) {
            Estimated difference = look.adjusted().difference();
            sheet.put(Metric.ADJUSTED_DIFFERENCE, difference.value(), labels);
            sheet.putPresent(Metric.ADJUSTED_DIFFERENCE_LOWER, difference.lower(), labels);
            sheet.putPresent(Metric.ADJUSTED_DIFFERENCE_UPPER, difference.upper(), labels);
        }
    }

    private static void runner(Sheet sheet, RunnerReport report) {
        sheet.put(Metric.COMMITS, report.commits(), report.group());
        sheet.put(Metric.ABORTS, report.aborts(), report.group());
        report.restoreSeconds().ifPresent(seconds -> sheet.put(Metric.RESTORE, seconds, report.group()));
        sheet.put(Metric.RESTORE_WAITING, report.waitingPartitions(), report.group());
        sheet.put(Metric.RESTORE_REMAINING, report.remainingRecords(), report.group());
        sheet.putState(Metric.REACHED, report.brokerReached(), report.group());
    }

    private static void webhook(Sheet sheet, WebhookReport report) {
        sheet.put(Metric.WEBHOOK_ATTEMPTS, report.attempts());
        sheet.put(Metric.WEBHOOK_FAILURES, report.failures());
        sheet.put(Metric.WEBHOOK_PENDING, report.pending());
        report.oldestAgeSeconds().ifPresent(seconds -> sheet.put(Metric.WEBHOOK_OLDEST, seconds));
        sheet.put(Metric.WEBHOOK_PARKED, report.parked());
    }
}
