package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Verdict;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.proportion.StratifiedComparison;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.time.Instant;
import java.util.Collection;
import java.util.Locale;
import java.util.Optional;
import java.util.TreeMap;

/**
 * The group-sequential test of one challenger against the control: takes looks, keeps the boundaries already used, and
 * latches the verdict. At the last look (information used up and the minimum run over, or the run over) all remaining error
 * is spent.
 */
final class ChallengerTest {

    /**
     * Least growth of the information fraction between two looks. Below it a look could find next to nothing that the one
     * before did not, and its boundary would need an ever finer quadrature.
     */
    private static final double LEAST_GROWTH = 0.001;

    private final Plan plan;
    private final Variant challenger;
    private final int variant;
    private final int control;
    private final LookCalendar calendar;
    private final TreeMap<Integer, TakenLook> looks = new TreeMap<>();
    private final DecisionMemo memo;
    private final String planDigest;
    private PlanDesign design;
    private LookPath path;
    private Verdict verdict = Verdict.WAITING;
    private Verdict held;

    ChallengerTest(Plan plan, String planDigest, Variant challenger, DecisionMemo memo) {
        this.plan = plan;
        this.planDigest = planDigest;
        this.memo = memo;
        this.challenger = challenger;
        variant = plan.variantIndex(challenger.name());
        control = plan.variantIndex(plan.control().name());
        calendar = new LookCalendar(plan);
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
            design = memo.design(plan, planDigest, challenger);
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
        Optional<StratifiedComparison> comparison = StratifiedComparison.of(counts.strata(variant));
        double fraction = comparison
                .map(found -> found.information() / design().maximumInformation())
                .orElse(0.0);
        if (!runEnds && !calendar.isDue(windowEnd, fraction, minimumRunOver(windowEnd))) {
            return new Attempt.NotDue();
        }
        String obstacle = obstacle(counts, fraction, runEnds);
        if (comparison.isEmpty() || !obstacle.isEmpty()) {
            return new Attempt.Delayed(obstacle, calendar.delayed());
        }
        TakenLook look = look(comparison.get(), fraction, windowEnd, runEnds, sound);
        calendar.taken(windowEnd, fraction);
        return new Attempt.Taken(look);
    }

    private String obstacle(CumulativeCounts counts, double fraction, boolean runEnds) {
        int least = plan.test().minimumPerCell();
        for (int arm : new int[] {control, variant}) {
            long successes = counts.successes(arm);
            long failures = counts.trials(arm) - successes;
            if (successes < least || failures < least) {
                return String.format(
                        Locale.ROOT,
                        "%s has %d successes and %d failures (a look needs %d of each)",
                        plan.variants().get(arm).name(),
                        successes,
                        failures,
                        least);
            }
        }
        if (!runEnds && stands(fraction)) {
            return String.format(
                    Locale.ROOT,
                    "the information fraction has grown from %.4f to %.4f only (a look needs %.3f more)",
                    lastInformation(),
                    fraction,
                    LEAST_GROWTH);
        }
        return "";
    }

    /** Whether information has hardly grown since the last look. */
    private boolean stands(double fraction) {
        return fraction - lastInformation() < LEAST_GROWTH;
    }

    private double lastInformation() {
        return lastLook().map(look -> look.look().information()).orElse(0.0);
    }

    private TakenLook look(
            StratifiedComparison found, double fraction, long windowEnd, boolean runEnds, boolean sound) {
        boolean benefitOpen = runEnds || minimumRunOver(windowEnd);
        boolean last = runEnds || (fraction >= 1 && benefitOpen);
        double spendingTime = last ? 1 : Math.min(fraction, 1);
        TailSpending spent =
                TailSpending.at(plan, design().spending().spent(design().tailLevel(), spendingTime), benefitOpen);
        double betaSpent = plan.futility().isPresent() && !last ? betaSpent(spendingTime) : 0;
        LookPath.Request request = new LookPath.Request(fraction, spent.upper(), spent.lower(), betaSpent);
        LookPath.Bounds bounds =
                runEnds && !looks.isEmpty() && stands(fraction) ? lastLookAgain(request) : path().next(request);
        Look look = bounds.look();
        double futilityBound = bounds.futility();
        Verdict finding = judge(found.z(), look, futilityBound, last);
        settle(finding, sound);
        TakenLook taken = new TakenLook(
                Instant.ofEpochMilli(windowEnd),
                look,
                betaSpent,
                futilityBound,
                comparison(found, look, futilityBound, reason(found.z(), look, finding)));
        looks.put(look.number(), taken);
        return taken;
    }

    /**
     * The look at the end of a run whose data have not grown since the look before: that look once more, as if it had been
     * the last. It crosses wherever the look before would have crossed, so that both together spend what the one may spend.
     */
    private LookPath.Bounds lastLookAgain(LookPath.Request request) {
        Look before = looks.lastEntry().getValue().look();
        Look again = path().lastAgain(new LookPath.Request(
                before.information(), request.upperSpent(), request.lowerSpent(), request.betaSpent()));
        return new LookPath.Bounds(
                new Look(
                        before.number() + 1,
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

    private double betaSpent(double spendingTime) {
        return PlanDesign.spendingFunction(plan.futility().orElseThrow().spending())
                .spent(1 - plan.test().power(), spendingTime);
    }

    private Verdict judge(double z, Look look, double futilityBound, boolean last) {
        if (z >= look.upper()) {
            return higherIsBetter() ? Verdict.STOP_BENEFIT : Verdict.STOP_HARM;
        }
        if (z <= look.lower()) {
            return higherIsBetter() ? Verdict.STOP_HARM : Verdict.STOP_BENEFIT;
        }
        if (last) {
            return Verdict.EXHAUSTED;
        }
        double towardsBenefit = higherIsBetter() ? z : -z;
        return towardsBenefit < futilityBound ? Verdict.STOP_FUTILITY : Verdict.CONTINUE;
    }

    private void settle(Verdict finding, boolean sound) {
        if (finding.settled() && !sound) {
            verdict = Verdict.CONTINUE;
            held = finding;
        } else {
            verdict = finding;
        }
    }

    /** The run ended without a further look. */
    void exhaust(boolean sound) {
        if (sound) {
            verdict = Verdict.EXHAUSTED;
        } else {
            held = Verdict.EXHAUSTED;
        }
    }

    /** Trust has returned: a verdict that waited for it is told now. Returns whether there was one. */
    boolean release() {
        if (held == null) {
            return false;
        }
        verdict = held;
        held = null;
        return true;
    }

    private Comparison comparison(StratifiedComparison found, Look look, double futilityBound, String reason) {
        double scale = Math.sqrt(found.information());
        return new Comparison(
                name(),
                look.number(),
                found.z(),
                found.information(),
                look.information(),
                look.upperSpent() + look.lowerSpent(),
                finite(look.upper()),
                finite(look.lower()),
                finite(higherIsBetter() ? futilityBound : -futilityBound),
                found.difference(),
                finite((found.z() - look.upper()) / scale),
                finite((found.z() - look.lower()) / scale),
                verdict,
                held,
                reason);
    }

    private static Double finite(double value) {
        return Double.isInfinite(value) ? null : value;
    }

    private String reason(double z, Look look, Verdict found) {
        String text = switch (found) {
            case STOP_BENEFIT -> "z %.3f has reached the benefit boundary %.3f";
            case STOP_HARM -> "z %.3f has reached the harm boundary %.3f";
            case STOP_FUTILITY -> "z %.3f makes a benefit unlikely within the planned information";
            case EXHAUSTED -> "the planned information or time is used up and z %.3f has crossed no boundary";
            case CONTINUE, WAITING -> "z %.3f lies between the boundaries";
        };
        double crossed = z >= look.upper() ? look.upper() : look.lower();
        String reason = String.format(Locale.ROOT, text, z, crossed);
        return held == null ? reason : reason + "; held until the data are trusted again";
    }

    private boolean higherIsBetter() {
        return plan.test().better() == Better.HIGHER;
    }

    private LookPath path() {
        if (path == null) {
            path = new LookPath(
                    design().drift(), higherIsBetter(), memo.path(planDigest, challenger, design().alpha()));
            for (TakenLook taken : looks.values()) {
                Look look = taken.look();
                path.resume(
                        new LookPath.Request(
                                look.information(), look.upperSpent(), look.lowerSpent(), taken.betaSpent()),
                        new LookPath.Bounds(look, taken.futility()));
            }
        }
        return path;
    }

    void restoreLook(TakenLook look) {
        looks.put(look.look().number(), look);
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
