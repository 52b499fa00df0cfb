package io.tallyward.demo.story;

import static java.nio.charset.StandardCharsets.UTF_8;

import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.Iterator;
import java.util.List;
import java.util.Locale;
import java.util.NoSuchElementException;
import java.util.SplittableRandom;
import java.util.function.Consumer;
import java.util.regex.Matcher;
import java.util.regex.Pattern;

/**
 * All stories with as many visitors as one likes, told hour by hour and never held as a whole. What is told is what
 * {@link Scenario} tells; only the number of units differs. Since a unit may come back within three days, three days of
 * further views wait in memory, a twentieth of the whole.
 *
 * <p>Everything follows from the seed: two walks through the same season meet the same events.
 *
 * @param seed what everything follows from
 * @param scale units per unit of the demo's scenario, greater than 0
 */
public record Season(long seed, double scale) {

    /** Events that come with the scale of 1, within a few in a hundred. */
    private static final double EVENTS_AT_SCALE_1 = 632_000;

    private static final long HOUR_MILLIS = Duration.ofHours(1).toMillis();
    private static final int HOURS =
            (int) Duration.between(Northwater.START, Northwater.END).toHours();
    private static final int BOT_HOUR = (int) Duration.ofDays(3).toHours();

    /** No event arrives longer than this before the first view that it belongs to. */
    private static final int HOURS_AHEAD = 1;

    private static final Pattern SMALLEST_EFFECT = Pattern.compile("smallest-effect: ([0-9.]+)");

    private static final Comparator<StreamEvent> ARRIVAL =
            Comparator.comparingLong(StreamEvent::receivedMillis).thenComparingLong(StreamEvent::id);

    public Season {
        if (!(scale > 0 && scale < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException("scale: " + scale + " (expected: greater than 0)");
        }
    }

    /** A season of about so many events. */
    public static Season ofAbout(long events, long seed) {
        return new Season(seed, events / EVENTS_AT_SCALE_1);
    }

    /** Hears of each unit once, when all of its events in one experiment are known, and of what belongs to no unit. */
    public interface Listener {
        /** All events of one unit in one experiment in the order of their arrival; none has a flaw. */
        void unit(Story story, List<StreamEvent> events);

        /** A record that must be rejected. */
        void flawed(StreamEvent event);
    }

    /** The stories in the order in which they are told. */
    public List<Story> stories() {
        return Scenario.STORIES;
    }

    /**
     * Writes the plan of every story. The smallest effect shrinks with the square root of the scale, so that the planned
     * information lasts as long as in the demo and looks are taken all the way.
     */
    public void writePlans(Path directory) throws IOException {
        Files.createDirectories(directory);
        for (Story story : stories()) {
            String file = story.experiment() + ".yaml";
            Matcher effect = SMALLEST_EFFECT.matcher(new String(Scenario.plan(file), UTF_8));
            String plan = effect.replaceAll(found -> String.format(
                    Locale.ROOT, "smallest-effect: %.6f", Double.parseDouble(found.group(1)) / Math.sqrt(scale)));
            Files.writeString(directory.resolve(file), plan);
        }
    }

    /** Walks through all events in the order of arrival; the listener hears of a unit before its first event comes. */
    public Iterator<StreamEvent> walk(Listener listener) {
        return new Walk(listener);
    }

    /** One walk. Events wait in the hour of their arrival until no earlier one can be told any more. */
    private final class Walk implements Iterator<StreamEvent> {

        private final Listener listener;
        private final Roster roster = new Roster(seed);
        private final SplittableRandom moments;
        private final List<Teller> tellers = new ArrayList<>();
        private final List<StreamEvent> told = new ArrayList<>();
        private final List<List<StreamEvent>> waiting = new ArrayList<>();
        private final double[] due;
        private List<StreamEvent> current = List.of();
        private int position;
        private int toldHours;
        private int givenHours;
        private long units;

        Walk(Listener listener) {
            this.listener = listener;
            SplittableRandom seeds = new SplittableRandom(seed);
            moments = seeds.split();
            Consumer<StreamEvent> out = told::add;
            List<Story> stories = stories();
            due = new double[stories.size()];
            for (int number = 0; number < stories.size(); number++) {
                tellers.add(new Teller(stories.get(number), roster, new Ids(seed, number), seeds.split(), out));
            }
            Debris.scatter(roster, new Ids(seed, Scenario.DEBRIS), seeds.split(), out);
            settle(null);
        }

        @Override
        public boolean hasNext() {
            while (position == current.size()) {
                if (toldHours > HOURS && givenHours == waiting.size()) {
                    return false;
                }
                giveHour();
            }
            return true;
        }

        @Override
        public StreamEvent next() {
            if (!hasNext()) {
                throw new NoSuchElementException("the season is over");
            }
            return current.get(position++);
        }

        private void giveHour() {
            while (toldHours <= HOURS && toldHours <= givenHours + HOURS_AHEAD) {
                tellHour(toldHours++);
            }
            current = bucket(givenHours);
            current.sort(ARRIVAL);
            waiting.set(givenHours, List.of());
            position = 0;
            givenHours++;
        }

        /** The hour after the last belongs to those who come after the fourteen days. */
        private void tellHour(int hour) {
            List<Story> stories = stories();
            long coming = 0;
            for (int number = 0; number < stories.size(); number++) {
                Story story = stories.get(number);
                long came = hour < HOURS ? visitors(number, story, hour) : lastVisitors(tellers.get(number), story);
                if (hour == BOT_HOUR && story instanceof QuayBanner) {
                    tellers.get(number).tellBot(Scenario.BOT);
                    settle(story);
                }
                coming = Math.max(coming, came);
            }
            units += coming;
        }

        private long visitors(int number, Story story, int hour) {
            due[number] += story.units() * scale / (HOURS / 24) * Rhythm.share(hour % 24);
            long count = (long) due[number];
            due[number] -= count;
            long from = Northwater.START.toEpochMilli() + hour * HOUR_MILLIS;
            for (long i = 0; i < count; i++) {
                tellers.get(number).tellUnit(roster.unit(units + i), from + moments.nextLong(HOUR_MILLIS));
                settle(story);
            }
            return count;
        }

        private long lastVisitors(Teller teller, Story story) {
            if (!teller.outlastsStream()) {
                return 0;
            }
            for (int i = 0; i < Teller.LAST_VISITORS; i++) {
                teller.tellLastVisitor(roster.unit(units + i));
                settle(story);
            }
            return Teller.LAST_VISITORS;
        }

        /** Passes on what was told of one unit, and lets it wait for its hour. */
        private void settle(Story storyOrNull) {
            told.sort(ARRIVAL);
            List<StreamEvent> sound = new ArrayList<>(told.size());
            for (StreamEvent event : told) {
                bucket(hourOf(event.receivedMillis())).add(event);
                if (event.flaw() == Flaw.NONE) {
                    sound.add(event);
                } else {
                    listener.flawed(event);
                }
            }
            told.clear();
            if (!sound.isEmpty()) {
                listener.unit(storyOrNull, sound);
            }
        }

        private List<StreamEvent> bucket(int hour) {
            while (waiting.size() <= hour) {
                waiting.add(new ArrayList<>());
            }
            return waiting.get(hour);
        }

        private int hourOf(long millis) {
            return (int) Math.max(0, (millis - Northwater.START.toEpochMilli()) / HOUR_MILLIS);
        }
    }
}
