package io.tallyward.engine.plan;

import io.tallyward.engine.plan.TestPlan.SpendingClock;
import java.time.Instant;
import java.util.List;
import java.util.Optional;
import java.util.TreeSet;

/** What an amendment must not break. */
public final class AmendmentRules {

    /** Shares may miss 1 by the rounding of decimals in binary, and by nothing more. */
    private static final double SHARE_TOLERANCE = 1e-9;

    /** More amendments than this are another experiment. */
    public static final int MOST = 100;

    private static final int MOST_REASON = 500;

    private AmendmentRules() {}

    /**
     * What is wrong with a list of amendments.
     *
     * @param found what is there
     * @param expected what may be there
     */
    public record Problem(int index, String found, String expected) {
        @Override
        public String toString() {
            return "amendment " + (index + 1) + ": " + found + " (expected: " + expected + ")";
        }
    }

    /** The first thing that is wrong with a plan's amendments; each is judged on top of those before it. */
    public static Optional<Problem> problem(Plan plan) {
        List<Amendment> all = plan.amendments();
        if (all.size() > MOST) {
            return Optional.of(new Problem(MOST, all.size() + " amendments", "at most " + MOST));
        }
        for (int i = 0; i < all.size(); i++) {
            Optional<Problem> problem = problem(i, all.get(i), plan.amended(all.subList(0, i)));
            if (problem.isPresent()) {
                return problem;
            }
        }
        return Optional.empty();
    }

    private static Optional<Problem> problem(int index, Amendment amendment, Plan before) {
        Optional<Problem> moment = moment(index, amendment, before);
        if (moment.isPresent()) {
            return moment;
        }
        if (amendment.reason().isBlank() || amendment.reason().length() > MOST_REASON) {
            return Optional.of(new Problem(
                    index, "a reason of " + amendment.reason().length() + " characters", "1 to " + MOST_REASON));
        }
        if (amendment.change() instanceof Amendment.End other) {
            return end(index, amendment, other.end(), before);
        }
        return amendment.change() instanceof Amendment.Shares other ? shares(index, other, before) : Optional.empty();
    }

    private static Optional<Problem> moment(int index, Amendment amendment, Plan before) {
        if (before.stopped()) {
            return Optional.of(new Problem(index, "an amendment after a stop", "nothing: a stop is final"));
        }
        Instant at = amendment.at();
        if (isUnaligned(at, before)) {
            return Optional.of(new Problem(index, "at " + at, aligned(before)));
        }
        Instant latest = latest(before, amendment.change());
        if (!at.isAfter(latest)) {
            return Optional.of(new Problem(
                    index, "at " + at, "after " + latest + ", where the run starts or last changes before it"));
        }
        return at.isBefore(before.end())
                ? Optional.empty()
                : Optional.of(new Problem(index, "at " + at, "before the end of the run, " + before.end()));
    }

    /**
     * The last moment at which something takes effect that the amendment has to come after: amendments do so in order, and the split
     * is amended after the ramp that was planned. A stop has to come after the beginning only; it overtakes what is still to come.
     */
    private static Instant latest(Plan before, Amendment.Change change) {
        if (change instanceof Amendment.Stop) {
            return before.run().from();
        }
        List<Amendment> earlier = before.amendments();
        Instant latest = earlier.isEmpty()
                ? before.run().from()
                : earlier.get(earlier.size() - 1).at();
        List<AllocationEpoch> planned = before.epochs();
        boolean ramping = change instanceof Amendment.Shares
                && !planned.isEmpty()
                && planned.get(planned.size() - 1).from().isAfter(latest);
        return ramping ? planned.get(planned.size() - 1).from() : latest;
    }

    private static Optional<Problem> end(int index, Amendment amendment, Instant end, Plan before) {
        if (isUnaligned(end, before)) {
            return Optional.of(new Problem(index, "end " + end, aligned(before)));
        }
        if (!end.isAfter(amendment.at())) {
            return Optional.of(new Problem(index, "end " + end, "after " + amendment.at() + ", where it takes effect"));
        }
        Instant longest = before.run().from().plus(Plan.LONGEST_RUN);
        if (end.isAfter(longest)) {
            return Optional.of(new Problem(index, "end " + end, "at most " + longest));
        }
        boolean byCalendar = before.test().clock() == SpendingClock.CALENDAR;
        if (byCalendar && end.isAfter(before.run().end())) {
            return Optional.of(new Problem(
                    index,
                    "end " + end,
                    "at most " + before.run().end()
                            + ", as alpha is spent by the calendar and nothing of it is left after that"));
        }
        return Optional.empty();
    }

    private static Optional<Problem> shares(int index, Amendment.Shares other, Plan before) {
        TreeSet<String> names = new TreeSet<>();
        before.variants().forEach(variant -> names.add(variant.name()));
        if (!names.equals(other.shares().keySet())) {
            return Optional.of(new Problem(
                    index,
                    "shares of "
                            + String.join(", ", new TreeSet<>(other.shares().keySet())),
                    "the share of every variant: " + String.join(", ", names)));
        }
        double sum = other.shares().values().stream()
                .mapToDouble(Double::doubleValue)
                .sum();
        boolean inRange = other.shares().values().stream().allMatch(share -> share > 0 && share < 1);
        return inRange && StrictMath.abs(sum - 1) <= SHARE_TOLERANCE
                ? Optional.empty()
                : Optional.of(
                        new Problem(index, "shares that add up to " + sum, "shares between 0 and 1 that add up to 1"));
    }

    private static boolean isUnaligned(Instant moment, Plan plan) {
        return Math.floorMod(moment.toEpochMilli(), plan.count().window().toMillis()) != 0;
    }

    private static String aligned(Plan plan) {
        return "a moment at the start of a window of " + plan.count().window();
    }
}
