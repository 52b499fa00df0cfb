package io.tallyward.demo;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.networknt.schema.InputFormat;
import com.networknt.schema.Schema;
import com.networknt.schema.SchemaRegistry;
import com.networknt.schema.SpecificationVersion;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.stream.StreamFile;
import io.tallyward.service.command.CommandLineFactory;
import java.io.IOException;
import java.io.PrintWriter;
import java.io.StringWriter;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;
import picocli.CommandLine;

/** What is decided about the stories: of the published form, proving itself, and told in plain words. */
class DecidedStoriesIT {

    /** What the explanation of each story begins with. */
    private static final Map<String, String> TOLD = Map.of(
            "quay-banner", "quay-banner: wide does better than plain.",
            "fare-chip", "fare-chip: no difference between chip and bare was found.",
            "return-prompt", "return-prompt: prompt does worse than silent.",
            "cabin-upsell", "cabin-upsell: no verdict on offer, as the data are not trusted.",
            "deck-map", "deck-map: chart is unlikely to prove better than list; tilt does better than list.",
            "pier-webcam", "pier-webcam: live does better than still.");

    private static String run(int status, String... arguments) {
        StringWriter out = new StringWriter();
        StringWriter err = new StringWriter();
        CommandLine commandLine = CommandLineFactory.of(
                        Map.of(),
                        (config, plans) -> {
                            throw new AssertionError("the service was started");
                        },
                        (properties, topics) -> {
                            throw new AssertionError("the broker was asked");
                        },
                        (properties, topic, values) -> {
                            throw new AssertionError("a topic was read");
                        },
                        (properties, topics, from, to, records) -> {
                            throw new AssertionError("the input was read");
                        },
                        () -> {})
                .setOut(new PrintWriter(out))
                .setErr(new PrintWriter(err));
        assertEquals(status, commandLine.execute(arguments), err::toString);
        return out.toString();
    }

    @Test
    void areOfThePublishedFormProveThemselvesAndAreTold(@TempDir Path directory) throws IOException {
        Scenario scenario = Scenario.of(Scenario.DEFAULT_SEED);
        Path events = directory.resolve("stream.jsonl");
        StreamFile.write(scenario, events);
        Path plans = directory.resolve("plans");
        scenario.writePlans(plans);
        List<String> decisions = run(
                        0,
                        "replay",
                        "--json",
                        "--partitions",
                        "4",
                        "--events",
                        events.toString(),
                        "--plans",
                        plans.toString())
                .lines()
                .filter(line -> line.startsWith("{\"type\":\"decision\""))
                .toList();
        assertTrue(decisions.size() > 100, "decisions: " + decisions.size());
        Schema schema = SchemaRegistry.withDefaultDialect(SpecificationVersion.DRAFT_2020_12)
                .getSchema(run(0, "schema", "decision"), InputFormat.JSON);
        for (String decision : decisions) {
            assertEquals(List.of(), schema.validate(decision, InputFormat.JSON), decision);
        }
        Path log = Files.write(directory.resolve("decisions.jsonl"), decisions);
        assertTrue(run(0, "verify", log.toString()).contains("each follows from its own counts"));
        for (Story story : scenario.stories()) {
            String told = run(0, "explain", "--experiment", story.experiment(), log.toString());
            assertEquals(TOLD.get(story.experiment()), told.lines().findFirst().orElseThrow());
            assertTrue(told.contains("What this does not say: ") && told.contains("What to do: "), told);
        }
    }
}
