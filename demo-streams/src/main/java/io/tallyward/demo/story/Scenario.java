package io.tallyward.demo.story;

import java.io.IOException;
import java.io.InputStream;
import java.io.UncheckedIOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.SplittableRandom;
import java.util.function.Consumer;

/**
 * All stories, told from one seed.
 *
 * @param seed what everything follows from
 * @param stories the stories, in the order in which they are shown
 * @param events the events of all stories in the order of arrival; some 630,000
 */
public record Scenario(long seed, List<Story> stories, List<StreamEvent> events) {

    /** The seed of the demo unless another one is asked for. */
    public static final long DEFAULT_SEED = 20_260_504L;

    /** In the order in which they are shown. */
    static final List<Story> STORIES = List.of(
            new QuayBanner(), new FareChip(), new ReturnPrompt(), new CabinUpsell(), new DeckMap(), new PierWebcam());

    /** Number of the ids of records that belong to no story. */
    static final int DEBRIS = 200;

    /** The unit of the program that fetches the page of the quay banner. */
    static final String BOT = "u-fetcher";

    public Scenario {
        stories = List.copyOf(stories);
        events = List.copyOf(events);
    }

    /** Tells all stories. Takes about a second and 80 MB. */
    public static Scenario of(long seed) {
        List<Story> stories = STORIES;
        List<StreamEvent> events = new ArrayList<>(600_000);
        Roster roster = new Roster(seed);
        SplittableRandom seeds = new SplittableRandom(seed);
        Consumer<StreamEvent> out = events::add;
        for (int number = 0; number < stories.size(); number++) {
            Story story = stories.get(number);
            Teller teller = new Teller(story, roster, new Ids(seed, number), seeds.split(), out);
            teller.tell();
            if (story instanceof QuayBanner) {
                teller.tellBot(BOT);
            }
        }
        Debris.scatter(roster, new Ids(seed, DEBRIS), seeds.split(), out);
        events.sort(Comparator.comparingLong(StreamEvent::receivedMillis).thenComparingLong(StreamEvent::id));
        return new Scenario(seed, stories, events);
    }

    /** Names of the plan files, one per story. */
    public List<String> planFiles() {
        return stories.stream().map(story -> story.experiment() + ".yaml").toList();
    }

    /** Writes the plan of every story into a directory, which is made if need be. */
    public void writePlans(Path directory) throws IOException {
        Files.createDirectories(directory);
        for (String file : planFiles()) {
            Files.write(directory.resolve(file), plan(file));
        }
    }

    static byte[] plan(String file) {
        try (InputStream plan = Scenario.class.getResourceAsStream(file)) {
            if (plan == null) {
                throw new IllegalStateException("plan " + file
                        + ": missing from the program (expected: a resource beside " + Scenario.class.getName() + ")");
            }
            return plan.readAllBytes();
        } catch (IOException e) {
            throw new UncheckedIOException(e);
        }
    }
}
