package io.tallyward.demo.story;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.HashSet;
import java.util.Iterator;
import java.util.List;
import java.util.Set;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class SeasonTest {

    private static final long EVENTS = 200_000;

    private final Season season = Season.ofAbout(EVENTS, Scenario.DEFAULT_SEED);

    /** What a walk said, in the order in which it was said. */
    private static final class Heard implements Season.Listener {
        private final Set<StreamEvent> announced = new HashSet<>();
        private long flawed;
        private long sound;

        @Override
        public void unit(Story story, List<StreamEvent> events) {
            for (StreamEvent event : events) {
                assertEquals(story.experiment(), event.subject().experiment());
                assertEquals(events.get(0).subject().unit(), event.subject().unit());
            }
            announced.addAll(events);
            sound += events.size();
        }

        @Override
        public void flawed(StreamEvent event) {
            announced.add(event);
            flawed++;
        }
    }

    private static List<StreamEvent> walk(Season season, Season.Listener listener) {
        List<StreamEvent> events = new ArrayList<>();
        season.walk(listener).forEachRemaining(events::add);
        return events;
    }

    @Test
    void hasAboutAsManyEventsAsAskedFor() {
        double events = walk(season, new Heard()).size();
        assertTrue(Math.abs(events / EVENTS - 1) < 0.03, "events: " + events);
    }

    @Test
    void comesInTheOrderOfArrival() {
        List<StreamEvent> events = walk(season, new Heard());
        for (int i = 1; i < events.size(); i++) {
            assertTrue(events.get(i - 1).receivedMillis() <= events.get(i).receivedMillis(), "event " + i);
        }
    }

    @Test
    void announcesEveryEventBeforeItComes() {
        Heard heard = new Heard();
        Iterator<StreamEvent> walk = season.walk(heard);
        long events = 0;
        while (walk.hasNext()) {
            assertTrue(heard.announced.contains(walk.next()), "event " + events);
            events++;
        }
        assertEquals(events, heard.sound + heard.flawed);
        assertTrue(heard.flawed > 0, "no flawed record");
    }

    @Test
    void announcesAUnitOncePerExperiment() {
        Set<Subject> seen = new HashSet<>();
        walk(season, new Season.Listener() {
            @Override
            public void unit(Story story, List<StreamEvent> events) {
                Subject first = events.get(0).subject();
                assertTrue(seen.add(new Subject(first.experiment(), "", first.unit(), Device.WEB)), first.unit());
            }

            @Override
            public void flawed(StreamEvent event) {
                assertFalse(event.flaw() == Flaw.NONE);
            }
        });
    }

    @Test
    void isTheSameForTheSameSeedOnly() {
        assertEquals(walk(season, new Heard()), walk(season, new Heard()));
        assertFalse(walk(season, new Heard())
                .equals(walk(Season.ofAbout(EVENTS, Scenario.DEFAULT_SEED + 1), new Heard())));
    }

    @Test
    void shrinksTheSmallestEffectWithTheRootOfTheScale(@TempDir Path directory) throws Exception {
        new Season(1, 4).writePlans(directory);
        String plan = Files.readString(directory.resolve("quay-banner.yaml"));
        assertTrue(plan.contains("smallest-effect: 0.005250,"), plan);
    }

    @Test
    void refusesAScaleThatIsNone() {
        assertThrows(IllegalArgumentException.class, () -> new Season(1, 0));
        assertThrows(IllegalArgumentException.class, () -> new Season(1, Double.NaN));
    }
}
