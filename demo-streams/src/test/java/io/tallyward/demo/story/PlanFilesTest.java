package io.tallyward.demo.story;

import static org.junit.jupiter.api.Assertions.assertArrayEquals;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.Checked;
import io.tallyward.service.plan.PlanDirectory;
import java.nio.file.Path;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** The plan files say what the stories say; the monitor's own reader reads them. */
class PlanFilesTest {

    @TempDir
    private Path directory;

    @Test
    void monitorReadsWhatTheStoriesSay() throws Exception {
        Scenario scenario = ToldScenario.withDefaultSeed();
        scenario.writePlans(directory);
        Checked<List<Plan>> read = PlanDirectory.read(directory);
        assertTrue(read.problems().isEmpty(), () -> read.problems().toString());
        Map<String, Plan> plans = new HashMap<>();
        read.orElseThrow().forEach(plan -> plans.put(plan.experiment(), plan));
        assertEquals(scenario.stories().size(), plans.size());
        scenario.stories().forEach(story -> assertFits(story, plans.get(story.experiment())));
    }

    private static void assertFits(Story story, Plan plan) {
        assertEquals(
                story.variants(), plan.variants().stream().map(Variant::name).toList());
        assertEquals(story.variants().get(0), plan.control().name());
        assertEquals(Northwater.START, plan.run().from());
        assertEquals(story.runEnd(), plan.run().end());
        assertEquals(
                story.splitChanges(),
                plan.epochs().stream().map(epoch -> epoch.from()).toList());
        for (int epoch = 0; epoch <= plan.epochs().size(); epoch++) {
            assertArrayEquals(story.shares(epoch), plan.sharesIn(epoch), 1e-12);
        }
        assertEquals(Northwater.ATTRIBUTION, plan.count().attribution());
        assertEquals(Northwater.GRACE, plan.count().grace());
        assertEquals(Northwater.WINDOW, plan.count().window());
        assertEquals(0.05, plan.test().alpha());
    }
}
