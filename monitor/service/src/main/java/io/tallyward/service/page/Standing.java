package io.tallyward.service.page;

import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.plan.PlanWords;
import io.tallyward.statistics.ratio.UnitSums;
import java.math.BigInteger;
import java.time.Duration;
import java.util.Comparator;
import java.util.List;
import java.util.Optional;
import java.util.StringJoiner;
import java.util.stream.Collectors;
import java.util.stream.Stream;

/**
 * An experiment's view, asked the way pages ask.
 *
 * @param view the snapshot
 */
record Standing(ExperimentView view) {

    String name() {
        return view.plan().experiment();
    }

    /** How soon somebody should look. */
    Urgency urgency() {
        if (view.trust() != Trust.SOUND || harm() || held()) {
            return Urgency.ATTENTION;
        }
        if (view.verdict().settled()) {
            return Urgency.SETTLED;
        }
        return view.verdict() == Verdict.WAITING ? Urgency.WAITING : Urgency.RUNNING;
    }

    /** Whether harm by any variant was found. */
    boolean harm() {
        return worst() == Verdict.STOP_HARM;
    }

    /** The verdict to act on first: harm by one variant, whatever the others do, else the one on the experiment. */
    Verdict worst() {
        return view.verdicts().containsValue(Verdict.STOP_HARM) ? Verdict.STOP_HARM : view.verdict();
    }

    /** Whether a verdict waits for trust to return. */
    boolean held() {
        return !view.held().isEmpty();
    }

    /** The verdicts that wait for trust to return, each in a sentence; empty when none does. */
    String heldInWords() {
        StringJoiner sentences = new StringJoiner(" ");
        for (Variant challenger : challengers()) {
            Verdict held = view.held().get(challenger.name());
            if (held != null) {
                sentences.add((challengers().size() == 1 ? "" : challenger.name() + ": ") + Wording.held(held));
            }
        }
        return sentences.toString();
    }

    /** What to do about a verdict, naming the variants that have it. */
    String action(Verdict verdict) {
        return Wording.action(
                verdict,
                challengers().stream()
                        .map(Variant::name)
                        .filter(name -> view.verdicts().get(name) == verdict)
                        .toList());
    }

    /** Names of the variants whose verdict is told. */
    List<String> ended() {
        return challengers().stream()
                .filter(challenger -> verdictOn(challenger).settled())
                .map(Variant::name)
                .toList();
    }

    /** What to do about the verdicts that are told, harm first. */
    String endedActions() {
        return challengers().stream()
                .map(this::verdictOn)
                .filter(Verdict::settled)
                .distinct()
                .sorted(Comparator.comparing(verdict -> verdict != Verdict.STOP_HARM))
                .map(this::action)
                .collect(Collectors.joining(" "));
    }

    List<Variant> challengers() {
        return view.plan().challengers();
    }

    Verdict verdictOn(Variant challenger) {
        return view.verdicts().getOrDefault(challenger.name(), Verdict.WAITING);
    }

    /** The latest look at a challenger; empty before its first. */
    Optional<Comparison> latest(Variant challenger) {
        return Optional.ofNullable(view.comparisons().get(challenger.name()));
    }

    boolean higherIsBetter() {
        return view.plan().test().better() == Better.HIGHER;
    }

    long trials(Variant variant) {
        return counts(variant).mapToLong(VariantCount::trials).sum();
    }

    long successes(Variant variant) {
        return counts(variant).mapToLong(VariantCount::successes).sum();
    }

    /** Whether trials are views, of which a unit may have several. */
    boolean countsViews() {
        return PlanWords.countsViews(view.plan());
    }

    long units(Variant variant) {
        return counts(variant).mapToLong(VariantCount::units).sum();
    }

    /** Units are what was allocated, whatever a trial is. */
    long units(Variant variant, int epoch) {
        return counts(variant)
                .filter(count -> count.epoch() == epoch)
                .mapToLong(VariantCount::units)
                .sum();
    }

    long unitsIn(int epoch) {
        return view.counts().stream()
                .filter(count -> count.epoch() == epoch)
                .mapToLong(VariantCount::units)
                .sum();
    }

    /** The sums over all units of a variant; empty where units are counted. */
    Optional<UnitSums> unitSums(Variant variant) {
        return counts(variant)
                .filter(count -> count.unitTotals() != null)
                .map(Standing::unitSums)
                .reduce(UnitSums::plus);
    }

    private static UnitSums unitSums(VariantCount count) {
        return new UnitSums(
                count.units(),
                BigInteger.valueOf(count.trials()),
                BigInteger.valueOf(count.successes()),
                BigInteger.valueOf(count.unitTotals().trialSquares()),
                BigInteger.valueOf(count.unitTotals().products()),
                BigInteger.valueOf(count.unitTotals().successSquares()));
    }

    /** Epochs that have trials, ascending. */
    List<Integer> epochs() {
        return view.counts().stream()
                .filter(count -> count.trials() > 0)
                .map(VariantCount::epoch)
                .distinct()
                .sorted()
                .toList();
    }

    /** Length of the longest possible run, amendments considered. */
    Duration length() {
        return Duration.between(view.plan().run().from(), view.plan().end());
    }

    /** How much of the longest possible run is complete, in [0, 1]. */
    double runFraction() {
        return elapsed().toMillis() / (double) length().toMillis();
    }

    /** How much of the run is complete, in event time. */
    Duration elapsed() {
        Run run = view.plan().run();
        Duration elapsed = view.completeUntil()
                .map(end -> Duration.between(run.from(), end))
                .orElse(Duration.ZERO);
        if (elapsed.isNegative()) {
            return Duration.ZERO;
        }
        return elapsed.compareTo(run.atMost()) > 0 ? run.atMost() : elapsed;
    }

    private Stream<VariantCount> counts(Variant variant) {
        return view.counts().stream().filter(count -> count.variant().equals(variant.name()));
    }

    /** Groups of the overview, most urgent first. */
    enum Urgency {
        /** The data are not trusted, harm was found, or a verdict is held. */
        ATTENTION("Needs attention"),
        /** A final verdict that the owner can act on by day. */
        SETTLED("Verdict reached"),
        /** Looks were taken, nothing is decided. */
        RUNNING("Running"),
        /** No look yet. */
        WAITING("Before the first look");

        private final String heading;

        Urgency(String heading) {
            this.heading = heading;
        }

        String heading() {
            return heading;
        }
    }
}
