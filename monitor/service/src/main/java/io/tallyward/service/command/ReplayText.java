package io.tallyward.service.command;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.command.Replay.WindowKey;
import io.tallyward.service.plan.PlanWords;
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
        lines.addAll(legend());
        lines.add("events read: " + replay.events() + ", rejected: " + rejected());
        return lines;
    }

    private List<String> legend() {
        List<String> lines = new ArrayList<>();
        lines.add(
                replay.sealed()
                        ? "Windows still open at the end of the input are counted too."
                        : "Windows still open at the end of the input are not counted yet; --seal-open counts them.");
        if (replay.decisions().stream()
                .anyMatch(decision -> !decision.comparisons().isEmpty())) {
            lines.addAll(BoundariesText.wrapped(
                    "At each look z, of variant minus control, is held against its boundaries; information is the share of"
                            + " the planned information that was in. What a comparison ended with rests on the counts of"
                            + " that look; later ones are in the counts at the end of the input and change no verdict.",
                    0));
        }
        return lines;
    }

    private List<String> experiment(Plan plan, List<DecisionRecord> decisions) {
        List<String> lines = new ArrayList<>();
        lines.add(plan.experiment() + ": " + standing(plan.experiment(), decisions));
        lines.add("counts at the end of the input");
        lines.addAll(counts(plan).lines());
        if (decisions.stream().anyMatch(decision -> !decision.comparisons().isEmpty())) {
            lines.addAll(looks(decisions).lines());
            lines.addAll(estimates(plan, decisions));
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
        ExperimentView view = replay.views().get(experiment);
        if (view != null && !view.held().isEmpty()) {
            return held(view) + ", held because of " + view.trust().code();
        }
        if (!decisions.isEmpty()) {
            DecisionRecord last = decisions.get(decisions.size() - 1);
            return standing(last.verdict(), last.trust());
        }
        return view == null ? "no events" : standing(view.verdict(), view.trust());
    }

    private static String held(ExperimentView view) {
        return view.held().entrySet().stream()
                .map(entry -> (view.held().size() > 1 ? entry.getKey() + " " : "")
                        + entry.getValue().code())
                .collect(Collectors.joining(", "));
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
        Table table = new Table("variant", "epoch", PlanWords.trials(plan), PlanWords.successes(plan), "rate");
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
    private static List<String> estimates(Plan plan, List<DecisionRecord> decisions) {
        List<String> lines = new ArrayList<>();
        for (DecisionRecord decision : decisions) {
            for (Comparison look : decision.comparisons()) {
                Verdict verdict = look.held() == null ? look.verdict() : look.held();
                if (look.adjusted() != null) {
                    lines.addAll(estimate(plan, look));
                    lines.add(countsThen(plan, decision, look));
                } else if (verdict == Verdict.STOP_FUTILITY) {
                    lines.addAll(repeated(look));
                    lines.add(countsThen(plan, decision, look));
                }
            }
        }
        return lines;
    }

    /** The counts that a comparison ended with. */
    private static String countsThen(Plan plan, DecisionRecord decision, Comparison look) {
        List<String> parts = new ArrayList<>();
        for (String variant : List.of(plan.control().name(), look.variant())) {
            long trials = 0;
            long successes = 0;
            for (VariantCount count : decision.counts()) {
                if (count.variant().equals(variant)) {
                    trials += count.trials();
                    successes += count.successes();
                }
            }
            parts.add(
                    String.format(Locale.ROOT, "%s %,d of %,d %s", variant, successes, trials, PlanWords.trials(plan)));
        }
        return PlanWords.successes(plan) + " at that look: " + String.join(", ", parts);
    }

    /** A stop for futility crosses no boundary: there is no adjusted estimate, and the repeated interval is what is valid. */
    private static List<String> repeated(Comparison look) {
        return new Table(look.variant() + ", when it was given up", "estimate", "from", "to")
                .row(
                        "difference in points, repeated interval",
                        points(look.difference()),
                        points(look.differenceLower()),
                        points(look.differenceUpper()))
                .lines();
    }

    private static String pValue(Plan plan) {
        if (plan.test().sides() == Sides.ONE) {
            return "one-sided p";
        }
        return plan.test().symmetric() ? "two-sided p" : "two-sided p, weighted";
    }

    private static List<String> estimate(Plan plan, Comparison look) {
        Adjusted adjusted = look.adjusted();
        Table table = new Table(look.variant() + ", when it ended", "estimate", "from", "to", pValue(plan));
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
