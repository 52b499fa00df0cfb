package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Verdict;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.TreeSet;

/**
 * The tests of all challengers of one experiment: tells held verdicts once trust has returned, takes the looks that are due,
 * passes levels on from those found to the others, and ends what the run's end leaves open.
 */
final class Challengers {

    private final Plan plan;
    private final List<ChallengerTest> tests = new ArrayList<>();
    private PassedOn passedOn = new PassedOn(Set.of(), Set.of());

    Challengers(Plan plan, String planDigest, DecisionMemo memo, Detail detail) {
        this.plan = plan;
        for (Variant challenger : plan.challengers()) {
            tests.add(new ChallengerTest(plan, planDigest, challenger, memo, detail));
        }
    }

    /** The challengers whose levels the others have, by position. */
    private record PassedOn(Set<Integer> benefits, Set<Integer> harms) {}

    /**
     * What a window led to.
     *
     * @param looks the looks taken, in the plan's order
     * @param ended whether the end of the run has ended a test that could take no look
     * @param settled the tests whose verdict was told
     * @param looksDelayed how many looks have begun to wait
     * @param delayReason why the last look that was due has to wait; empty when none has
     */
    record Outcome(
            List<TakenLook> looks,
            boolean ended,
            List<ChallengerTest> settled,
            int looksDelayed,
            Optional<String> delayReason) {

        /** Why a record is to be written; empty when there is nothing to say. */
        Optional<Occasion> occasion(boolean trustChanged) {
            if (!looks.isEmpty()) {
                return Optional.of(Occasion.LOOK);
            }
            if (ended) {
                return Optional.of(Occasion.END);
            }
            return trustChanged ? Optional.of(Occasion.TRUST) : Optional.empty();
        }

        List<Comparison> comparisons() {
            return looks.stream().map(TakenLook::comparison).toList();
        }
    }

    /** All tests, in the plan's order. */
    List<ChallengerTest> tests() {
        return tests;
    }

    /** The verdict on the experiment. */
    Verdict verdict() {
        return OverallVerdict.of(tests.stream().map(ChallengerTest::verdict).toList());
    }

    /** Whether every verdict has been told. */
    boolean concluded() {
        return tests.stream().allMatch(test -> test.verdict().settled());
    }

    boolean anySettled() {
        return tests.stream().anyMatch(test -> test.verdict().settled());
    }

    /**
     * Decides at the end of a window.
     *
     * @param runEnds whether the window is the last of the run
     * @param sound whether the data are trusted; verdicts are held while they are not, and told once they are
     */
    Outcome decide(CumulativeCounts counts, long windowEnd, boolean runEnds, boolean sound) {
        List<ChallengerTest> settled = new ArrayList<>();
        if (sound) {
            tests.stream().filter(ChallengerTest::release).forEach(settled::add);
        }
        passOn();
        Map<ChallengerTest, TakenLook> looks = new LinkedHashMap<>();
        int looksDelayed = 0;
        Optional<String> delayReason = Optional.empty();
        for (ChallengerTest test : tests) {
            if (!test.isOpen() || (runEnds && plan.stopped())) {
                continue;
            }
            ChallengerTest.Attempt attempt = test.attempt(counts, windowEnd, runEnds, sound);
            if (attempt instanceof ChallengerTest.Attempt.Taken taken) {
                looks.put(test, taken.look());
            } else if (attempt instanceof ChallengerTest.Attempt.Delayed delayed) {
                looksDelayed += delayed.begun() ? 1 : 0;
                delayReason = Optional.of(delayed.reason());
            }
        }
        while (passOn()) {
            looks.replaceAll((test, look) -> found(test) ? look : test.judgeAgain(sound));
        }
        looks.keySet().stream().filter(test -> test.verdict().settled()).forEach(settled::add);
        boolean ended = runEnds && end(sound, settled);
        return new Outcome(List.copyOf(looks.values()), ended, settled, looksDelayed, delayReason);
    }

    private static boolean found(ChallengerTest test) {
        return test.verdict() == Verdict.STOP_BENEFIT || test.verdict() == Verdict.STOP_HARM;
    }

    /** Gives every challenger that is not found the level that those found leave to it; returns whether any level rose. */
    private boolean passOn() {
        Set<Integer> benefits = positions(Verdict.STOP_BENEFIT);
        Set<Integer> harms = positions(Verdict.STOP_HARM);
        if (benefits.equals(passedOn.benefits()) && harms.equals(passedOn.harms())) {
            return false;
        }
        passedOn = new PassedOn(benefits, harms);
        boolean rose = false;
        for (int i = 0; i < tests.size(); i++) {
            if (!found(tests.get(i))) {
                rose |= tests.get(i).raise(TailLevels.of(plan, i, benefits, harms));
            }
        }
        return rose;
    }

    private Set<Integer> positions(Verdict verdict) {
        if (tests.stream().noneMatch(test -> test.verdict() == verdict)) {
            return Set.of();
        }
        Set<Integer> positions = new TreeSet<>();
        for (int i = 0; i < tests.size(); i++) {
            if (tests.get(i).verdict() == verdict) {
                positions.add(i);
            }
        }
        return positions;
    }

    /**
     * At the end of the run every test that could not take a last look is exhausted, or stopped by the owner; returns whether there was one.
     */
    private boolean end(boolean sound, List<ChallengerTest> settled) {
        boolean any = false;
        for (ChallengerTest test : tests) {
            if (test.isOpen()) {
                if (plan.stopped()) {
                    test.stop();
                } else {
                    test.exhaust(sound);
                }
                any = true;
                if (test.verdict().settled()) {
                    settled.add(test);
                }
            }
        }
        return any;
    }

    /**
     * Positions of the variants that need not be shown any more: while other challengers go on, those whose verdict was told.
     */
    List<Integer> leftOut(List<ChallengerTest> settled) {
        return concluded()
                ? List.of()
                : settled.stream().map(test -> plan.variantIndex(test.name())).toList();
    }

    void restoreLook(TakenLook look) {
        tests.stream()
                .filter(test -> test.name().equals(look.comparison().variant()))
                .forEach(test -> test.restoreLook(look));
    }

    void write(DataOutput out) throws IOException {
        for (ChallengerTest test : tests) {
            test.write(out);
        }
    }

    void read(DataInput in) throws IOException {
        for (ChallengerTest test : tests) {
            test.read(in);
        }
        passOn();
    }
}
