package io.tallyward.engine.decide;

import io.tallyward.engine.record.Verdict;
import java.util.List;

/** The verdict on an experiment as a whole, a summary of its comparisons. */
final class OverallVerdict {

    private OverallVerdict() {}

    /**
     * Sums up: a benefit if any challenger has one, else harm if any does harm; once all are settled otherwise, futility if
     * all are futile, else stopped if the owner stopped any, else exhausted.
     */
    static Verdict of(List<Verdict> verdicts) {
        if (verdicts.contains(Verdict.STOP_BENEFIT)) {
            return Verdict.STOP_BENEFIT;
        }
        if (verdicts.contains(Verdict.STOP_HARM)) {
            return Verdict.STOP_HARM;
        }
        if (verdicts.stream().allMatch(Verdict.STOP_FUTILITY::equals)) {
            return Verdict.STOP_FUTILITY;
        }
        if (verdicts.stream().allMatch(Verdict::settled)) {
            return verdicts.contains(Verdict.STOPPED) ? Verdict.STOPPED : Verdict.EXHAUSTED;
        }
        return verdicts.stream().allMatch(Verdict.WAITING::equals) ? Verdict.WAITING : Verdict.CONTINUE;
    }
}
