package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.boundary.Look;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.time.Instant;
import java.util.Collection;
import java.util.List;
import java.util.Optional;
import java.util.TreeMap;
import java.util.stream.Collectors;
import java.util.stream.Stream;

/**
 * The group-sequential test of one challenger against the control: takes looks, keeps the boundaries already used, and
 * latches the verdict. At the last look (information used up and the minimum run over, or the run over) all remaining error
 * is spent; unless the run was amended to end earlier than planned, as whoever did that may have seen the counts: then only
 * what the spending clock allows for.
 *
 * <p>When another challenger passes its level on, the boundaries from then on are those of a test that had the larger level
 * from the start; only the look at hand and later ones are judged by them (Maurer and Bretz 2013).
 */
final class ChallengerTest {

    private final Plan plan;
    private final Variant challenger;
    private final int variant;
    private final Readiness readiness;
    private final LookCalendar calendar;
    private final LookClocks clocks;
    private final DecisionMemo memo;
    private final String planDigest;
    private final Detail detail;
    private final TreeMap<Integer, TakenLook> looks = new TreeMap<>();
    private final TailLevels initialLevels;
    private TailLevels levels;
    private PlanDesign design;
    private FutilityRule futility;
    private LookReport report;
    private LookPath path;
    private Sitting sitting;
    private Verdict verdict = Verdict.WAITING;
    private Verdict held;

    ChallengerTest(Plan plan, String planDigest, Variant challenger, DecisionMemo memo, Detail detail) {
        this.plan = plan;
        this.planDigest = planDigest;
        this.challenger = challenger;
        this.memo = memo;
        this.detail = detail;
        variant = plan.variantIndex(challenger.name());
        readiness = new Readiness(plan, variant);
        calendar = new LookCalendar(plan);
        clocks = new LookClocks(plan);
        initialLevels = TailLevels.initial(plan, plan.challengers().indexOf(challenger));
        levels = initialLevels;
    }

    /** What came of a look that was due. */
    sealed interface Attempt {
        /** The look was taken. */
        record Taken(TakenLook look) implements Attempt {}

        /** The look has to wait; {@code begun} tells whether it has only now begun to. */
        record Delayed(String reason, boolean begun) implements Attempt {}

        /** No look was due. */
        record NotDue() implements Attempt {}
    }

    String name() {
        return challenger.name();
    }

    Verdict verdict() {
        return verdict;
    }

    Optional<Verdict> held() {
        return Optional.ofNullable(held);
    }

    Optional<TakenLook> lastLook() {
        return looks.isEmpty()
                ? Optional.empty()
                : Optional.of(looks.lastEntry().getValue());
    }

    Collection<TakenLook> looks() {
        return looks.values();
    }

    PlanDesign design() {
        if (design == null) {
            design = memo.design(plan, challenger);
            futility = new FutilityRule(plan, design);
            report = new LookReport(plan, challenger.name(), design, detail);
        }
        return design;
    }

    /** Whether the test goes on: neither settled nor waiting for trust. */
    boolean isOpen() {
        return !verdict.settled() && held == null;
    }

    /**
     * Takes a look if one is due.
     *
     * @param runEnds whether this window is the last of the run
     * @param sound whether the data are trusted; if not, a final verdict is held
     */
    Attempt attempt(CumulativeCounts counts, long windowEnd, boolean runEnds, boolean sound) {
        Optional<Evidence> evidence = counts.evidence(variant);
        double fraction =
                evidence.map(found -> clocks.fraction(found, design())).orElse(0.0);
        double clock = evidence.map(
                        found -> clocks.correlation(found, design(), fraction, windowEnd, runEnds, lastLook()))
                .orElse(0.0);
        boolean minimumRunOver = minimumRunOver(windowEnd);
        if (!runEnds && !calendar.isDue(windowEnd, fraction, minimumRunOver)) {
            return new Attempt.NotDue();
        }
        if (evidence.isEmpty()) {
            return new Attempt.Delayed(readiness.tooFew(counts).orElse(Readiness.NOTHING_VARIES), calendar.delayed());
        }
        boolean cutShort = runEnds && plan.end().isBefore(plan.run().end());
        boolean benefitOpen = minimumRunOver || (runEnds && !cutShort);
        boolean last = runEnds || (fraction >= 1 && benefitOpen);
        double time = last && !cutShort ? 1 : clocks.spending(fraction, windowEnd);
        Optional<String> caution = readiness.tooSkew(
                evidence.get().skewness(),
                () -> TailSpending.at(plan, levels, time, benefitOpen),
                TailSpending.all(plan, levels));
        Optional<String> obstacle =
                readiness.tooFew(counts).or(() -> runEnds ? Optional.empty() : growing(fraction, clock, caution));
        if (obstacle.isPresent()) {
            return new Attempt.Delayed(obstacle.get(), calendar.delayed());
        }
        sitting = new Sitting(
                evidence.get(),
                fraction,
                clock,
                windowEnd,
                time,
                benefitOpen,
                last,
                runEnds && !looks.isEmpty() && Readiness.clockStands(clock, lastClock()),
                Stream.of(caution, calendar.late(windowEnd))
                        .flatMap(Optional::stream)
                        .collect(Collectors.joining("; ")));
        calendar.taken(windowEnd, fraction);
        return new Attempt.Taken(judge(sound));
    }

    /** A look before the end of the run waits for information, and for counts that the normal law describes. */
    private Optional<String> growing(double fraction, double clock, Optional<String> caution) {
        return stands(fraction, clock)
                ? Optional.of(Readiness.standing(fraction, lastFraction()))
                : caution.map(text -> text + " (a look needs " + Readiness.MOST_ERROR_PERCENT + " % or less)");
    }

    /** Whether hardly anything has come in since the last look, by either clock. */
    private boolean stands(double fraction, double clock) {
        return Readiness.stands(fraction, lastFraction()) || Readiness.clockStands(clock, lastClock());
    }

    private double lastClock() {
        return lastLook().map(look -> look.look().information()).orElse(0.0);
    }

    private double lastFraction() {
        return lastLook().map(look -> look.comparison().informationFraction()).orElse(0.0);
    }

    /**
     * Takes over the levels of the moment.
     *
     * @param now never below those before
     * @return whether they are new
     */
    boolean raise(TailLevels now) {
        if (now.equals(levels)) {
            return false;
        }
        levels = now;
        path = null;
        return true;
    }

    /** The look just taken, judged once more at levels that were raised since; nothing of it has been told. */
    TakenLook judgeAgain(boolean sound) {
        looks.pollLastEntry();
        path = null;
        verdict = Verdict.CONTINUE;
        held = null;
        return judge(sound);
    }

    private TakenLook judge(boolean sound) {
        design();
        double betaSpent = sitting.last() ? 0 : futility.betaSpent(sitting.time());
        LookPath.Bounds bounds = sitting.again() ? lastLookAgain() : bounds(betaSpent);
        Verdict finding = finding(sitting.found().z(), bounds);
        settle(finding, sound);
        List<Look> taken = path().looks();
        TakenLook look = new TakenLook(
                Instant.ofEpochMilli(sitting.windowEnd()),
                sitting.benefitOpen(),
                bounds.look(),
                sitting.found().scoreVariance(),
                betaSpent,
                bounds.futility(),
                report.write(
                        sitting,
                        levels,
                        bounds,
                        taken,
                        new LookReport.Outcome(finding, verdict, held, findingOfIndependentViews(bounds, finding))));
        looks.put(bounds.look().number(), look);
        return look;
    }

    private LookPath.Bounds bounds(double betaSpent) {
        TailSpending spent = TailSpending.at(plan, levels, sitting.time(), sitting.benefitOpen());
        boolean foresee = !sitting.last()
                && sitting.fraction() <= 1 - Readiness.LEAST_GROWTH
                && (futility.looksAhead() || detail == Detail.FULL);
        TailSpending end = foresee ? TailSpending.all(plan, levels) : null;
        LookPath.Bounds found =
                path().next(new LookPath.Request(sitting.clock(), sitting.fraction(), spent, betaSpent, end));
        return futility.looksAhead() && foresee && Double.isFinite(found.critical())
                ? new LookPath.Bounds(
                        found.look(),
                        StrictMath.min(futility.ahead(sitting.fraction(), found.critical()), benefit(found.look())),
                        found.critical())
                : found;
    }

    private double benefit(Look look) {
        return higherIsBetter() ? look.upper() : -look.lower();
    }

    /**
     * The look at the end of a run whose data have not grown since the look before: that look once more, as if it had been
     * the last. It crosses wherever the look before would have crossed, so that both together spend what the one may spend.
     */
    private LookPath.Bounds lastLookAgain() {
        Look again = path().lastAgain(TailSpending.at(plan, levels, sitting.time(), sitting.benefitOpen()));
        return LookPath.Bounds.of(
                new Look(
                        again.number() + 1,
                        again.information(),
                        again.upperSpent(),
                        again.lowerSpent(),
                        again.upper(),
                        again.lower()),
                Double.NEGATIVE_INFINITY);
    }

    private boolean minimumRunOver(long windowEnd) {
        return windowEnd >= plan.run().from().plus(plan.run().atLeast()).toEpochMilli();
    }

    private Verdict finding(double z, LookPath.Bounds bounds) {
        if (z >= bounds.look().upper()) {
            return higherIsBetter() ? Verdict.STOP_BENEFIT : Verdict.STOP_HARM;
        }
        if (z <= bounds.look().lower()) {
            return higherIsBetter() ? Verdict.STOP_HARM : Verdict.STOP_BENEFIT;
        }
        if (sitting.last()) {
            return Verdict.EXHAUSTED;
        }
        double towardsBenefit = higherIsBetter() ? z : -z;
        return towardsBenefit < bounds.futility() ? Verdict.STOP_FUTILITY : Verdict.CONTINUE;
    }

    /** What the look would have found by the same boundaries, had the views of a unit been independent. */
    private Verdict findingOfIndependentViews(LookPath.Bounds bounds, Verdict finding) {
        return sitting.found()
                .clustering()
                .map(clustering -> finding(clustering.independentZ(), bounds))
                .orElse(finding);
    }

    private void settle(Verdict finding, boolean sound) {
        if (finding.settled() && !sound) {
            verdict = verdict.become(Verdict.CONTINUE);
            held = finding;
        } else {
            verdict = verdict.become(finding);
        }
    }

    /** Ends the test without a finding: the owner has ended the experiment. A verdict that is held stays held. */
    void stop() {
        verdict = verdict.become(Verdict.STOPPED);
    }

    /** The run ended without a further look. */
    void exhaust(boolean sound) {
        if (sound) {
            verdict = verdict.become(Verdict.EXHAUSTED);
        } else {
            held = Verdict.EXHAUSTED;
        }
    }

    /** Trust has returned: a verdict that waited for it is told now. Returns whether there was one. */
    boolean release() {
        if (held == null) {
            return false;
        }
        verdict = verdict.become(held);
        held = null;
        return true;
    }

    private boolean higherIsBetter() {
        return plan.test().better() == Better.HIGHER;
    }

    /** At the levels it began with, stored looks are taken as they are; at raised ones all are solved anew. */
    private LookPath path() {
        if (path == null) {
            path = new LookPath(design().drift(), higherIsBetter(), memo.path(planDigest, challenger, levels));
            for (TakenLook taken : looks.values()) {
                double time = taken.comparison().spendingTime();
                LookPath.Request request = new LookPath.Request(
                        taken.look().information(),
                        taken.comparison().informationFraction(),
                        TailSpending.at(plan, levels, time, taken.benefitOpen()),
                        taken.betaSpent(),
                        null);
                if (levels.equals(initialLevels)) {
                    path.resume(request, LookPath.Bounds.of(taken.look(), taken.futility()));
                } else {
                    path.next(request);
                }
            }
        }
        return path;
    }

    void restoreLook(TakenLook look) {
        looks.put(look.look().number(), look);
        path = null;
    }

    void write(DataOutput out) throws IOException {
        calendar.write(out);
        out.writeUTF(verdict.name());
        out.writeUTF(held == null ? "" : held.name());
    }

    void read(DataInput in) throws IOException {
        calendar.read(in);
        verdict = Verdict.valueOf(in.readUTF());
        String heldName = in.readUTF();
        held = heldName.isEmpty() ? null : Verdict.valueOf(heldName);
    }
}
