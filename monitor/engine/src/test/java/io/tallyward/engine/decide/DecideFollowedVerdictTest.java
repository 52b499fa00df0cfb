package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.time.Duration;
import java.util.List;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;

/** What happens when people do what a notice says and stop showing one of several variants. */
class DecideFollowedVerdictTest {

    private static final Plan DECK_MAP = Plans.plan("deck-map")
            .counting(Duration.ofMinutes(30), Duration.ofMinutes(10), Duration.ofHours(1))
            .variants(
                    new Variant("list", 0.34, true),
                    new Variant("chart", 0.33, false),
                    new Variant("tilt", 0.33, false))
            .smallestEffect(0.006)
            .lookEvery(Duration.ofHours(6))
            .build();

    private final DecideHost host = new DecideHost(DECK_MAP);

    @BeforeEach
    void chartDoesHarm() {
        hours(12, 340, 68, 330, 26, 330, 66);
        assertEquals(Verdict.STOP_HARM, host.view().verdicts().get("chart"));
        assertEquals(Verdict.CONTINUE, host.view().verdicts().get("tilt"));
    }

    private void hours(int hours, long... trialsAndSuccesses) {
        for (int hour = 0; hour < hours; hour++) {
            host.next(trialsAndSuccesses);
        }
    }

    @Test
    void trustsTheOthersOnceTheHarmfulOneIsNoLongerShown() {
        hours(48, 507, 101, 0, 0, 493, 98);
        assertEquals(Trust.SOUND, host.view().trust(), host.view().trustReason());
        assertTrue(
                host.view().split().sequentialPValue() > 0.5,
                () -> "split: " + host.view().split());
        assertTrue(host.view().comparisons().get("tilt").look() > 2, "looks at the other challenger go on");
    }

    @Test
    void stillPagesWhenTheSplitOfTheOthersBreaks() {
        hours(24, 507, 101, 0, 0, 493, 98);
        hours(24, 600, 120, 0, 0, 400, 80);
        assertEquals(Trust.MISMATCH, host.view().trust());
        Notice mismatch = host.notices().get(host.notices().size() - 1);
        assertEquals(Notice.Kind.MISMATCH, mismatch.kind());
        assertEquals(Notice.Severity.PAGE, mismatch.severity());
        assertTrue(mismatch.action().endsWith(" A stop was told earlier: review it."), mismatch.action());
    }

    @Test
    void remembersAcrossARestartWhomItLeftOut() {
        DecideHost undisturbed = new DecideHost(DECK_MAP);
        for (int hour = 0; hour < 12; hour++) {
            undisturbed.next(340, 68, 330, 26, 330, 66);
        }
        host.restart(0);
        for (int hour = 0; hour < 48; hour++) {
            undisturbed.next(600, 120, 0, 0, 400, 80);
            host.next(600, 120, 0, 0, 400, 80);
        }
        assertEquals(undisturbed.decisions(), host.decisions());
        assertEquals(List.copyOf(undisturbed.notices()), List.copyOf(host.notices()));
    }
}
