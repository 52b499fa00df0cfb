package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** What the README shows of plans is what the program does. */
class ReadmeTest {

    /** Stands for lines that were left out. */
    private static final String CUT = "[...]";

    private static final Path README = Path.of("..", "..", "README.md");

    @TempDir
    Path directory;

    @Test
    void showsPlansThatCanBeRead() throws IOException, BadInputException {
        List<String> plans = plans();
        assertEquals(2, plans.size());
        for (String plan : plans) {
            assertEquals(
                    plan.lines().findFirst().orElseThrow(),
                    "experiment: "
                            + PlanReader.parse("README.md", plan).orElseThrow().experiment());
        }
    }

    /** Every line shown is printed, in that order. */
    @Test
    void showsWhatIsPrinted() throws IOException {
        Path file = Files.writeString(directory.resolve("prompt.yaml"), plans().get(1));
        List<String> printed =
                CommandRun.of("boundaries", "--plan", file.toString()).out();
        List<String> shown = blocks("").stream()
                .filter(block -> block.startsWith("return-first: does asking"))
                .flatMap(block -> Arrays.stream(block.split("\n")))
                .filter(line -> !line.equals(CUT))
                .toList();
        assertTrue(shown.size() > 30, "lines shown: " + shown.size());
        int from = 0;
        for (String line : shown) {
            int at = printed.subList(from, printed.size()).indexOf(line);
            assertTrue(at >= 0, "not printed, or not there: " + line);
            from += at + 1;
        }
    }

    /** The rehearsal shown, legend aside, is the one that its seed gives. */
    @Test
    void showsTheRehearsalThatIsPrinted() throws IOException {
        String plan = plans().get(0).replaceFirst("looks: \\{every: PT6H\\}.*", "looks: {every: P4D}");
        Path file = Files.writeString(directory.resolve("quay.yaml"), plan);
        List<String> shown = blocks("").stream()
                .filter(block -> block.contains("runs, seed 1;"))
                .flatMap(String::lines)
                .toList();
        assertTrue(shown.size() > 30, "lines shown: " + shown.size());
        List<String> printed = CommandRun.of(
                        "rehearse", "--plan", file.toString(), "--runs=1000", "--seed=1", "--rates=wide=0.126")
                .out();
        assertEquals(shown, printed.subList(0, shown.size()));
        assertTrue(printed.get(shown.size() + 1).startsWith("error "), "the legend follows");
    }

    private static List<String> plans() throws IOException {
        return blocks("yaml").stream()
                .filter(block -> block.startsWith("experiment:"))
                .toList();
    }

    /** The fenced blocks of a language, in order. */
    private static List<String> blocks(String language) throws IOException {
        List<String> blocks = new ArrayList<>();
        StringBuilder block = null;
        String fence = "";
        for (String line : Files.readAllLines(README)) {
            boolean atFence = line.strip().startsWith("```");
            if (atFence && block == null) {
                block = new StringBuilder();
                fence = line.strip().substring(3);
            } else if (atFence) {
                if (fence.equals(language)) {
                    blocks.add(block.toString());
                }
                block = null;
            } else if (block != null) {
                block.append(line).append('\n');
            }
        }
        return blocks;
    }
}
