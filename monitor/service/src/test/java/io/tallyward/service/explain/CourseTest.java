package io.tallyward.service.explain;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.OptionalInt;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;

/** Which record is explained, and what is said of it. */
class CourseTest {

    private static final String PLAN = """
            experiment: deck-map
            question: does a chart or a tilted map bring more seat choices?
            owner: onboard@northwater.example
            count: {by: unit, attribution: PT30M, grace: PT10M, window: PT1H}
            variants: {list: {share: 0.4, control: true}, chart: {share: 0.3}, tilt: {share: 0.3}}
            test: {alpha: 0.05, sides: two, power: 0.8, baseline: 0.2, smallest-effect: 0.02, spending: obrien-fleming}
            looks: {every: PT6H}
            run: {from: 2026-05-04T00:00:00Z, at-most: P2D}
            """;

    private final List<DecisionRecord> records = new ArrayList<>();
    private Plan plan;
    private DecideShard shard;
    private int window;

    @BeforeEach
    void freeze() throws BadInputException {
        plan = PlanReader.parse("deck-map.yaml", PLAN).orElseThrow();
        shard = new DecideShard(List.of(plan));
    }

    /** Hours in which each variant's units click at its rate in per cent; 400, 300 and 300 units arrive. */
    private void hours(int count, int list, int chart, int tilt) {
        for (int i = 0; i < count; i++) {
            long start = plan.run().from().plus(Duration.ofHours(window)).toEpochMilli();
            window++;
            List<Cell> cells = List.of(
                    Cell.ofUnits(0, 0, 400, 4L * list),
                    Cell.ofUnits(0, 1, 300, 3L * chart),
                    Cell.ofUnits(0, 2, 300, 3L * tilt));
            long successes = cells.stream().mapToLong(Cell::successes).sum();
            OutcomeCounts outcomes = OutcomeCounts.of(1000, successes, 0, 0, 0, 0, 0, 0, 0);
            shard.apply(new TallyUpdate(
                    plan.experiment(),
                    PlanDigest.of(plan),
                    0,
                    1,
                    start + Duration.ofHours(1).toMillis(),
                    SealCause.WATERMARK,
                    List.of(new WindowTally(start, cells, outcomes))));
            records.addAll(shard.drain().decisions());
        }
    }

    private Explanation explained(OptionalInt look) {
        Course course = new Course(look);
        records.forEach(course::take);
        return course.explanation().orElseThrow();
    }

    @Test
    void saysWhatIsAwaitedBeforeTheFirstLook() {
        hours(2, 20, 20, 20);
        Explanation explanation = explained(OptionalInt.empty());
        assertEquals(
                "deck-map: it is too early to say anything about chart; it is too early to say anything about tilt.",
                explanation.headline());
        assertTrue(
                explanation
                        .paragraphs()
                        .get(1)
                        .contains("one is due every 6 hours, and needs at least 5 units with a click"),
                explanation.paragraphs().toString());
    }

    @Test
    void goesOnTellingUntilEveryChallengerIsSettled() {
        hours(6, 20, 20, 30);
        assertEquals(
                "deck-map: no difference between chart and list is established yet; tilt does better than list.",
                explained(OptionalInt.empty()).headline());
        hours(30, 20, 28, 30);
        Explanation settled = explained(OptionalInt.empty());
        assertEquals("deck-map: chart does better than list; tilt does better than list.", settled.headline());
        assertEquals(1, explained(OptionalInt.of(1)).look());
        hours(6, 20, 20, 20);
        assertEquals(settled.record(), explained(OptionalInt.empty()).record(), "what comes later is another matter");
    }

    @Test
    void tellsThatTheOwnerEndedItAndThatNothingFollowsFromThat() {
        hours(8, 20, 20, 20);
        plan = plan.amended(List.of(
                new Amendment(plan.run().from().plus(Duration.ofHours(10)), "a complaint", new Amendment.Stop())));
        shard.adopt(List.of(new PlanBook.Entry(plan, true)));
        hours(2, 20, 20, 20);
        Explanation explanation = explained(OptionalInt.empty());
        assertEquals(
                "deck-map: the experiment was ended before anything was found about chart; the experiment was ended before"
                        + " anything was found about tilt.",
                explanation.headline());
    }
}
