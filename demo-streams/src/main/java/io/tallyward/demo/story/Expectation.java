package io.tallyward.demo.story;

import java.time.Duration;
import java.time.Instant;
import java.util.Map;
import java.util.Optional;
import java.util.Set;

/**
 * What a monitor ought to conclude about a story.
 *
 * @param truth what is true, in a few words
 * @param verdicts by challenger, the published codes of the verdicts that are right
 * @param falseAlarm probability that a monitor that works stops nevertheless, in [0, 1); 0 when that is out of the
 *     question (less than one seed in a thousand)
 * @param trust published code of the right trust
 * @param notice a notice that must be delivered; empty when none must
 * @param origin where a mismatch of the split must be said to come from; empty when there is none
 */
public record Expectation(
        String truth,
        Map<String, Set<String>> verdicts,
        double falseAlarm,
        String trust,
        Optional<ExpectedNotice> notice,
        Optional<ExpectedOrigin> origin) {

    /** Verdicts that leave an experiment without a stop for benefit or harm. */
    static final Set<String> NO_STOP = Set.of("waiting", "continue", "stop-futility", "exhausted");

    public Expectation {
        verdicts = Map.copyOf(verdicts);
    }

    /** What to conclude about a story whose split is sound. */
    Expectation(
            String truth,
            Map<String, Set<String>> verdicts,
            double falseAlarm,
            String trust,
            Optional<ExpectedNotice> notice) {
        this(truth, verdicts, falseAlarm, trust, notice, Optional.empty());
    }

    /**
     * Where a mismatch comes from.
     *
     * @param field the segment field that tells the units affected
     * @param value its value
     * @param began when it began
     * @param within how far off the monitor may be about that
     */
    public record ExpectedOrigin(String field, String value, Instant began, Duration within) {}

    /**
     * What a notice must be about.
     *
     * @param kind published code of its kind
     * @param variant the variant it names; empty when it concerns the experiment as a whole
     */
    public record ExpectedNotice(String kind, String variant) {}
}
