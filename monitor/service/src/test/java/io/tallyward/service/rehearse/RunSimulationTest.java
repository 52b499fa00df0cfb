package io.tallyward.service.rehearse;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;

import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.decide.DecisionMemo;
import io.tallyward.engine.decide.Detail;
import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.rehearse.Follower.Challenger;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.OptionalLong;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class RunSimulationTest {

    /** The oracle feeds a shard without memory one window at a time, and remembers nothing of the run before. */
    @ParameterizedTest
    @ValueSource(strings = {"every: P2D", "fractions: [0.3, 0.6, 1.0]"})
    void decidesAsIfEachStepHadComeAlone(String looks) {
        String text = Quay.TEN_LOOKS.replace("every: P2D", looks);
        RehearsedPlan rehearsed = rehearsed(text);
        RunSimulation simulation = new RunSimulation(rehearsed, Quay.request(1, 0.12, 0.15));
        for (long index = 0; index < 12; index++) {
            RunResult result = simulation.run(index, new DecisionMemo(1_000));
            Follower follower = stepByStep(simulation, rehearsed, index);
            Challenger wide = follower.challengers().get(0);
            assertEquals(wide.ending(), result.arms().get(0).ending());
            assertEquals(wide.looks().size(), result.arms().get(0).looks());
            assertEquals(follower.looks(), result.looks());
            assertEquals(follower.endMillis() - rehearsed.startMillis(0), result.millis());
            assertEquals(result, simulation.run(index, new DecisionMemo(1_000)));
        }
        assertNotEquals(simulation.run(0, new DecisionMemo(1_000)), simulation.run(1, new DecisionMemo(1_000)));
    }

    private static Follower stepByStep(RunSimulation simulation, RehearsedPlan rehearsed, long index) {
        Follower follower = new Follower(rehearsed.plan());
        DecideShard shard = new DecideShard(List.of(rehearsed.plan()), new DecisionMemo(0), Detail.FULL);
        Traffic traffic = simulation.traffic(index);
        for (int step = 0; step < rehearsed.steps() && !follower.over(); step++) {
            shard.apply(simulation.update(traffic, step, step + 1));
            shard.drain().decisions().forEach(follower::take);
        }
        return follower;
    }

    @Test
    void countsTheTrialsUntilTheVerdict() {
        RehearsedPlan rehearsed = rehearsed(Quay.TEN_LOOKS);
        RunResult result = new RunSimulation(rehearsed, Quay.request(1, 0.12, 0.5)).run(3, new DecisionMemo(10));
        long days = result.millis() / 86_400_000;
        assertEquals(4, days);
        assertEquals(rehearsed.arrivalsBefore(4), result.trials());
    }

    private static RehearsedPlan rehearsed(String text) {
        Plan plan = Quay.plan(text);
        Map<String, PlanDesign> designs = new HashMap<>();
        plan.challengers().forEach(challenger -> designs.put(challenger.name(), PlanDesign.of(plan, challenger)));
        return RehearsedPlan.of(plan, designs, OptionalLong.empty());
    }
}
