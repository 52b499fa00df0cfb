package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import org.junit.jupiter.api.Test;

class FollowerTest {

    private static final Plan TWO = Quay.plan(Quay.TEN_LOOKS);
    private static final Plan FOUR = Quay.plan(Quay.FOUR_ARMS);

    @Test
    void stopsReadingOnceEveryVerdictIsTold() {
        Follower follower = new Follower(TWO);
        follower.take(record(TWO, 2, Occasion.LOOK, Trust.SOUND, look("wide", Verdict.CONTINUE, null)));
        assertFalse(follower.over());
        follower.take(record(TWO, 4, Occasion.LOOK, Trust.SOUND, look("wide", Verdict.STOP_BENEFIT, null)));
        assertTrue(follower.over());
        follower.take(record(TWO, 5, Occasion.TRUST, Trust.MISMATCH));
        assertEquals(2, follower.looks());
        assertFalse(follower.mismatch());
        assertEquals(day(TWO, 4).toEpochMilli(), follower.endMillis());
        assertEquals(Ending.BENEFIT, follower.challengers().get(0).ending());
        assertEquals(2, follower.challengers().get(0).looks().size());
    }

    @Test
    void waitsForTheLastOfSeveral() {
        Follower follower = new Follower(FOUR);
        follower.take(record(
                FOUR,
                2,
                Occasion.LOOK,
                Trust.SOUND,
                look("wide", Verdict.STOP_HARM, null),
                look("tall", Verdict.STOP_FUTILITY, null),
                look("dusk", Verdict.CONTINUE, null)));
        assertFalse(follower.over());
        follower.take(record(FOUR, 4, Occasion.LOOK, Trust.SOUND, look("dusk", Verdict.EXHAUSTED, null)));
        assertTrue(follower.over());
        assertEquals(
                List.of(Ending.HARM, Ending.FUTILITY, Ending.EXHAUSTED),
                follower.challengers().stream().map(Follower.Challenger::ending).toList());
    }

    @Test
    void countsAVerdictThatWasNeverToldAsWithheld() {
        Follower follower = new Follower(TWO);
        follower.take(record(TWO, 1, Occasion.TRUST, Trust.MISMATCH));
        follower.take(
                record(TWO, 2, Occasion.LOOK, Trust.MISMATCH, look("wide", Verdict.CONTINUE, Verdict.STOP_BENEFIT)));
        assertFalse(follower.over());
        assertTrue(follower.mismatch());
        assertEquals(Ending.WITHHELD, follower.challengers().get(0).ending());
        assertEquals(TWO.run().end().toEpochMilli(), follower.endMillis());
    }

    @Test
    void tellsAHeldVerdictWhenTrustReturns() {
        Follower follower = new Follower(TWO);
        follower.take(record(TWO, 2, Occasion.LOOK, Trust.STARVED, look("wide", Verdict.CONTINUE, Verdict.STOP_HARM)));
        follower.take(record(TWO, 3, Occasion.TRUST, Trust.SOUND));
        assertEquals(Ending.HARM, follower.challengers().get(0).ending());
        assertEquals(day(TWO, 3).toEpochMilli(), follower.endMillis());
    }

    @Test
    void isExhaustedWhereTheRunEndsWithoutALook() {
        Follower follower = new Follower(TWO);
        follower.take(record(TWO, 20, Occasion.END, Trust.SOUND));
        assertEquals(Ending.EXHAUSTED, follower.challengers().get(0).ending());
        assertEquals(0, follower.looks());
        Follower doubtful = new Follower(TWO);
        doubtful.take(record(TWO, 20, Occasion.END, Trust.MISMATCH));
        assertEquals(Ending.WITHHELD, doubtful.challengers().get(0).ending());
    }

    private static Instant day(Plan plan, int day) {
        return plan.run().from().plus(Duration.ofDays(day));
    }

    private static DecisionRecord record(
            Plan plan, int day, Occasion occasion, Trust trust, Comparison... comparisons) {
        return new DecisionRecord(
                plan.experiment(),
                1,
                occasion,
                day(plan, day),
                "",
                List.of(),
                OutcomeCounts.NONE,
                0,
                new Split(0, 1, 0, 1, 1),
                trust,
                "",
                Verdict.CONTINUE,
                List.of(comparisons),
                "1",
                "",
                "");
    }

    private static Comparison look(String variant, Verdict verdict, Verdict held) {
        return new Comparison(
                variant, 1, 1, 100, 0.5, 0.5, 0.05, 0.01, 3.0, -3.0, null, 0.1, null, null, null, null, null, verdict,
                held, "");
    }
}
