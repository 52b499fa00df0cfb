package io.tallyward.demo.bench;

import io.tallyward.demo.story.CabinUpsell;
import io.tallyward.demo.story.DeckMap;
import io.tallyward.demo.story.FareChip;
import io.tallyward.demo.story.QuayBanner;
import io.tallyward.demo.story.ReturnPrompt;
import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.Story;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Instant;
import java.util.List;
import java.util.Set;
import java.util.stream.Collectors;
import java.util.stream.IntStream;

/**
 * Events without a plot, for measuring: as many as one likes, each a function of its number alone. Four to a unit on
 * average, within twenty minutes of each other; 12 % are clicks; every fiftieth is an exact duplicate of one shortly before
 * it; 200 a second of event time, up to two seconds out of order.
 */
final class Traffic {

    private static final long START = Instant.parse("2026-05-04T06:00:00Z").toEpochMilli();
    private static final int DUPLICATE_EVERY = 50;
    private static final int EVENTS_PER_UNIT = 4;
    private static final int MILLIS_PER_EVENT = 5;
    private static final int DISORDER_MILLIS = 2_000;

    /** Events during which those of one unit come: twenty minutes. */
    private static final int VISIT_EVENTS = 240_000;

    private static final double CLICK_SHARE = 0.12;

    /** Stories without their events: only their names and plans are of interest here. */
    private static final Scenario SCENARIO = new Scenario(
            Scenario.DEFAULT_SEED,
            List.of(new QuayBanner(), new FareChip(), new ReturnPrompt(), new CabinUpsell(), new DeckMap()),
            List.of());

    private static final Story MODEL = new QuayBanner();

    private final List<Compared> experiments;

    private Traffic(List<Compared> experiments) {
        this.experiments = experiments;
    }

    /** What is compared: the name of an experiment and its variants. */
    private record Compared(String experiment, List<String> variants) {}

    /** The traffic of the five stories. */
    static Traffic ofStories() {
        return new Traffic(SCENARIO.stories().stream()
                .map(story -> new Compared(story.experiment(), story.variants()))
                .toList());
    }

    /** The same number of events of the same units, spread over any number of experiments. */
    static Traffic over(int experiments) {
        return new Traffic(IntStream.range(0, experiments)
                .mapToObj(number -> new Compared("quay-" + number, MODEL.variants()))
                .toList());
    }

    /** Names of the experiments. */
    List<String> experiments() {
        return experiments.stream().map(Compared::experiment).toList();
    }

    /** Writes a plan for every experiment into a directory, which is made if need be. */
    void writePlans(Path directory) throws IOException {
        SCENARIO.writePlans(directory);
        Set<String> stories = SCENARIO.stories().stream().map(Story::experiment).collect(Collectors.toSet());
        Path model = directory.resolve(MODEL.experiment() + ".yaml");
        String text = Files.readString(model);
        for (Compared each : experiments) {
            if (!stories.remove(each.experiment())) {
                Files.writeString(
                        directory.resolve(each.experiment() + ".yaml"),
                        text.replace(
                                "experiment: " + MODEL.experiment() + "\n", "experiment: " + each.experiment() + "\n"));
            }
        }
        for (String unused : stories) {
            Files.delete(directory.resolve(unused + ".yaml"));
        }
    }

    /**
     * An event as it is sent.
     *
     * @param key the unit
     * @param value the event as JSON
     * @param atMillis event time, which is the record's timestamp too
     */
    record Sent(byte[] key, byte[] value, long atMillis) {}

    /** The event of a number, 0 or more. */
    Sent event(long number) {
        if (number % DUPLICATE_EVERY == DUPLICATE_EVERY - 1) {
            return original(number - 1 - Long.remainderUnsigned(mix(number), DUPLICATE_EVERY - 1));
        }
        return original(number);
    }

    private Sent original(long number) {
        long chance = mix(number);
        long unit = (number + Long.remainderUnsigned(chance, VISIT_EVENTS)) / EVENTS_PER_UNIT;
        long fate = mix(-unit - 1);
        Compared story = experiments.get((int) Long.remainderUnsigned(fate, experiments.size()));
        int variant = (int) Long.remainderUnsigned(fate >>> 8, story.variants().size());
        boolean click = (chance >>> 40) * 0x1p-24 < CLICK_SHARE;
        long at = START + number * MILLIS_PER_EVENT + (chance >>> 20) % DISORDER_MILLIS;
        String name = "visitor-" + Long.toString(100_000_000 + unit);
        String json = "{\"kind\":\"" + (click ? "click" : "view")
                + "\",\"experiment\":\"" + story.experiment()
                + "\",\"variant\":\"" + story.variants().get(variant)
                + "\",\"unit\":\"" + name
                + "\",\"id\":\"" + Long.toHexString(chance | Long.MIN_VALUE)
                + "\",\"at\":\"" + Instant.ofEpochMilli(at)
                + "\",\"source\":\"northwater-booking-page\"}";
        return new Sent(name.getBytes(StandardCharsets.UTF_8), json.getBytes(StandardCharsets.UTF_8), at);
    }

    /** Spreads numbers evenly: the output function of SplitMix64 (Steele, Lea and Flood 2014). */
    private static long mix(long number) {
        long z = (number + 1) * 0x9e3779b97f4a7c15L;
        z = (z ^ (z >>> 30)) * 0xbf58476d1ce4e5b9L;
        z = (z ^ (z >>> 27)) * 0x94d049bb133111ebL;
        return z ^ (z >>> 31);
    }
}
