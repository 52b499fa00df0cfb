package io.tallyward.service.command;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.command.Replay.WindowKey;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.SortedMap;
import java.util.TreeMap;
import java.util.stream.Collectors;

/** A replay as tables: for each experiment where it stands, its counts, its looks and what became of its events. */
final class ReplayText {

    private static final String NONE = "-";

    private final Replay replay;

    ReplayText(Replay replay) {
        this.replay = replay;
    }

    List<String> lines() {
        List<String> lines = new ArrayList<>();
        for (Plan plan : replay.plans().values()) {
            List<DecisionRecord> decisions = replay.decisions().stream()
                    .filter(decision -> decision.experiment().equals(plan.experiment()))
                    .toList();
            lines.addAll(experiment(plan, decisions));
            lines.add("");
        }
        lines.add("Windows still open at the end of the file are counted too.");
        lines.add("events read: " + replay.events() + ", rejected: " + rejected());
        return lines;
    }

    private List<String> experiment(Plan plan, List<DecisionRecord> decisions) {
        List<String> lines = new ArrayList<>();
        lines.add(plan.experiment() + ": " + standing(plan.experiment(), decisions));
        lines.addAll(counts(plan).lines());
        if (decisions.stream().anyMatch(decision -> !decision.comparisons().isEmpty())) {
            lines.addAll(looks(decisions).lines());
            lines.addAll(estimates(decisions));
        }
        decisions.stream()
                .filter(decision -> decision.trust() != Trust.SOUND)
                .reduce((first, last) -> last)
                .ifPresent(decision -> lines.add("trust at " + decision.windowEnd() + ": "
                        + decision.trust().code() + ", " + decision.trustReason()));
        lines.add("events: " + outcomes(replay.outcomes(plan.experiment())));
        return lines;
    }

    /** What the last record says, whatever its occasion; before the first one, where the experiment stands. */
    private String standing(String experiment, List<DecisionRecord> decisions) {
        if (!decisions.isEmpty()) {
            DecisionRecord last = decisions.get(decisions.size() - 1);
            return standing(last.verdict(), last.trust());
        }
        ExperimentView view = replay.views().get(experiment);
        return view == null ? "no events" : standing(view.verdict(), view.trust());
    }

    private static String standing(Verdict verdict, Trust trust) {
        return verdict.code() + ", data " + trust.code();
    }

    private Table counts(Plan plan) {
        SortedMap<Integer, long[][]> epochs = new TreeMap<>();
        int variants = plan.variants().size();
        replay.windows()
                .subMap(
                        new WindowKey(plan.experiment(), 0, Long.MIN_VALUE),
                        new WindowKey(plan.experiment(), Integer.MAX_VALUE, Long.MAX_VALUE))
                .forEach((key, counts) ->
                        add(epochs.computeIfAbsent(key.epoch(), epoch -> new long[variants][2]), counts));
        Table table = new Table("variant", "epoch", "trials", "successes", "rate");
        epochs.forEach((epoch, counts) -> {
            for (int i = 0; i < variants; i++) {
                double rate = (double) counts[i][1] / counts[i][0];
                table.row(
                        plan.variants().get(i).name(),
                        String.valueOf(epoch),
                        String.valueOf(counts[i][0]),
                        String.valueOf(counts[i][1]),
                        counts[i][0] == 0 ? NONE : decimals(rate));
            }
        });
        return table;
    }

    private static void add(long[][] sums, long[][] counts) {
        for (int i = 0; i < sums.length; i++) {
            sums[i][0] += counts[i][0];
            sums[i][1] += counts[i][1];
        }
    }

    private static Table looks(List<DecisionRecord> decisions) {
        Table table = new Table("look at", "variant", "look", "information", "z", "upper z", "lower z", "verdict");
        for (DecisionRecord decision : decisions) {
            for (Comparison comparison : decision.comparisons()) {
                table.row(
                        decision.windowEnd().toString(),
                        comparison.variant(),
                        String.valueOf(comparison.look()),
                        decimals(comparison.informationFraction()),
                        decimals(comparison.z()),
                        decimals(comparison.upper()),
                        decimals(comparison.lower()),
                        comparison.held() == null
                                ? comparison.verdict().code()
                                : comparison.held().code() + " (held)");
            }
        }
        return table;
    }

    /** The estimate of every comparison that has ended, adjusted for its looks, beside the naive one. */
    private static List<String> estimates(List<DecisionRecord> decisions) {
        List<String> lines = new ArrayList<>();
        for (DecisionRecord decision : decisions) {
            for (Comparison look : decision.comparisons()) {
                if (look.adjusted() != null) {
                    lines.addAll(estimate(look));
                }
            }
        }
        return lines;
    }

    private static List<String> estimate(Comparison look) {
        Adjusted adjusted = look.adjusted();
        Table table = new Table(look.variant() + ", when it ended", "estimate", "from", "to", "p-value");
        String interval = String.format(Locale.ROOT, "%.4g %%", 100 * adjusted.level());
        table.group("", 1).group("interval, " + interval, 2);
        table.row(
                "difference in points, adjusted for the looks",
                points(adjusted.difference().value()),
                points(adjusted.difference().lower()),
                points(adjusted.difference().upper()),
                String.format(Locale.ROOT, "%.3g", adjusted.pValue()));
        Estimated lift = adjusted.lift();
        if (lift != null) {
            table.row(
                    "relative to the control in %, adjusted",
                    points(lift.value()), points(lift.lower()), points(lift.upper()), "");
        }
        table.row("difference in points, naive", points(look.difference()), "", "", "");
        return table.lines();
    }

    private static String points(Double value) {
        return value == null ? NONE : String.format(Locale.ROOT, "%+.3f", 100 * value);
    }

    private static String outcomes(OutcomeCounts outcomes) {
        List<String> parts = new ArrayList<>();
        for (Outcome outcome : Outcome.values()) {
            parts.add(outcome.code() + " " + outcomes.get(outcome));
        }
        return String.join(", ", parts);
    }

    private String rejected() {
        String reasons = replay.rejections().counts().entrySet().stream()
                .filter(entry -> entry.getValue() > 0)
                .map(entry -> entry.getKey().code() + " " + entry.getValue())
                .collect(Collectors.joining(", "));
        return reasons.isEmpty() ? "none" : reasons;
    }

    private static String decimals(Double value) {
        return value == null ? NONE : String.format(Locale.ROOT, "%.4f", value);
    }
}
