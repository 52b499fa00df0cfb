package io.tallyward.service.rehearse;

import java.util.List;
import java.util.Optional;

/**
 * How one rehearsed run went.
 *
 * @param looks how often anything was looked at
 * @param trials trials of all variants until the last verdict was told, or the run ended
 * @param millis how long that took
 * @param mismatch whether the split check raised an alarm
 * @param waited how many looks were due and had to wait for more data
 * @param arms one entry per challenger, in the plan's order
 */
record RunResult(int looks, long trials, long millis, boolean mismatch, int waited, List<Arm> arms) {

    /**
     * How it went for one challenger.
     *
     * @param ending how the comparison ended
     * @param looks looks taken at it; the last is the one at which it stopped
     * @param naiveRejection whether an uncorrected test would have rejected at one of these looks
     * @param estimate what the last look says; empty without a look, after futility, or when estimates are left
     *     out
     */
    record Arm(Ending ending, int looks, boolean naiveRejection, Optional<StopEstimate> estimate) {

        boolean rejected() {
            return ending == Ending.BENEFIT || ending == Ending.HARM;
        }
    }

    boolean any(Ending ending) {
        return arms.stream().anyMatch(arm -> arm.ending() == ending);
    }

    boolean all(Ending ending) {
        return arms.stream().allMatch(arm -> arm.ending() == ending);
    }
}
