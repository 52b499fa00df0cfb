package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import java.time.Duration;
import java.util.HashMap;
import java.util.Map;
import java.util.OptionalLong;
import org.junit.jupiter.api.Test;

class RehearsedPlanTest {

    @Test
    void mergesWindowsAsFarAsTheScheduleAllows() {
        assertStep(Duration.ofDays(1), 20, Quay.TEN_LOOKS);
        assertStep(Duration.ofHours(6), 80, Quay.TEN_LOOKS.replace("every: P2D", "every: PT6H"));
        assertStep(Duration.ofHours(4), 120, Quay.TEN_LOOKS.replace("every: P2D", "every: PT20H"));
        assertStep(Duration.ofHours(12), 40, Quay.TEN_LOOKS.replace("at-most", "at-least: PT36H, at-most"));
        assertStep(
                Duration.ofHours(8),
                60,
                Quay.TEN_LOOKS + "epochs: [{from: 2026-05-05T08:00:00Z, shares: {plain: 0.4, wide: 0.6}}]\n");
    }

    @Test
    void takesManyStepsWhereLooksWaitForInformation() {
        // 20 days are 480 hours; 2 h leave 240 steps, 3 h would leave 160.
        assertStep(Duration.ofHours(2), 240, Quay.TEN_LOOKS.replace("every: P2D", "fractions: [0.5, 1.0]"));
        assertStep(
                Duration.ofHours(6),
                80,
                Quay.TEN_LOOKS.replace("every: P2D", "fractions: [0.5, 1.0]") + "count: {window: PT6H}\n");
    }

    @Test
    void endsTheMinimumRunWithItsWindow() {
        RehearsedPlan rehearsed =
                rehearsed(Quay.TEN_LOOKS.replace("at-most", "at-least: PT35H58M, at-most"), OptionalLong.empty());
        assertEquals(Duration.ofHours(36), rehearsed.plan().run().atLeast());
    }

    @Test
    void reachesThePlannedTrialsAtTheEnd() {
        Plan plan = Quay.plan(Quay.FOUR_ARMS);
        RehearsedPlan rehearsed = rehearsed(Quay.FOUR_ARMS, OptionalLong.empty());
        for (Variant challenger : plan.challengers()) {
            PlanDesign.of(plan, challenger)
                    .trials()
                    .forEach((name, trials) -> assertTrue(
                            rehearsed.arrivals() * plan.sharesIn(0)[plan.variantIndex(name)] >= trials - 1e-6, name));
        }
        // The smallest arm is what takes longest.
        long needed = PlanDesign.of(plan, plan.variants().get(3)).trials().get("dusk");
        assertEquals(needed / 0.1, rehearsed.arrivals(), 1);
    }

    @Test
    void spreadsArrivalsEvenly() {
        RehearsedPlan rehearsed = rehearsed(Quay.TEN_LOOKS, OptionalLong.of(777));
        assertEquals(20 * 777, rehearsed.arrivals());
        assertEquals(0, rehearsed.arrivalsBefore(0));
        assertEquals(rehearsed.arrivals(), rehearsed.arrivalsBefore(rehearsed.steps()));
        for (int step = 0; step <= rehearsed.steps(); step++) {
            assertEquals(777L * step, rehearsed.arrivalsBefore(step));
        }
    }

    @Test
    void refusesRunsThatAreTooLongToRehearse() {
        String endless = Quay.TEN_LOOKS.replace("every: P2D", "every: P1D")
                + "epochs: [{from: 2026-05-04T00:00:01Z, shares: {plain: 0.5, wide: 0.5}}]\n"
                + "count: {window: PT1S}\n";
        assertThrows(IllegalArgumentException.class, () -> rehearsed(endless, OptionalLong.empty()));
    }

    private static void assertStep(Duration step, int steps, String text) {
        RehearsedPlan rehearsed = rehearsed(text, OptionalLong.empty());
        assertEquals(step, rehearsed.step());
        assertEquals(steps, rehearsed.steps());
        assertEquals(rehearsed.plan().run().end().toEpochMilli(), rehearsed.startMillis(rehearsed.steps()));
    }

    private static RehearsedPlan rehearsed(String text, OptionalLong perDay) {
        Plan plan = Quay.plan(text);
        Map<String, PlanDesign> designs = new HashMap<>();
        plan.challengers().forEach(challenger -> designs.put(challenger.name(), PlanDesign.of(plan, challenger)));
        return RehearsedPlan.of(plan, designs, perDay);
    }
}
