package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.shard.StateChange;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;
import org.junit.jupiter.api.Test;

/** Units by segment: of the standing first exposure, bounded, and the same after a restart. */
class SegmentCountTest {

    private static final String UPSELL = "cabin-upsell";
    private static final Plan PLAN =
            Plans.plan(UPSELL).segments("version", "platform").build();

    /** A usual broker refuses records above 1 MB. */
    private static final int MOST_RECORD_BYTES = 1_000_000;

    private static Event view(String unit, String version, double minute) {
        return Events.with(
                Events.view(UPSELL, "plain", unit, "v" + minute, minute), "version", version, "platform", "app");
    }

    private static List<SegmentCell> segments(CountHost host) {
        return host.tallies().stream()
                .flatMap(update -> update.windows().stream())
                .flatMap(window -> window.segments().stream())
                .toList();
    }

    private static Map<String, Long> units(CountHost host, String field) {
        Map<String, Long> units = new TreeMap<>();
        segments(host).stream()
                .filter(cell -> cell.field().equals(field))
                .forEach(cell -> units.merge(cell.value(), cell.units(), Long::sum));
        return units;
    }

    @Test
    void countsEachUnitOncePerFieldByTheFieldsOfThePlanInTheirOrder() {
        CountHost host = CountHost.of(PLAN);
        host.feed(view("ada", "6.2", 1), view("ben", "6.3", 2), view("ben", "6.2", 3));
        host.feed(Events.with(Events.view(UPSELL, "wide", "cy", "v", 4), "version", "6.3", "language", "en"))
                .end();
        assertEquals(
                List.of(
                        new SegmentCell("platform", "app", 0, 0, 2),
                        new SegmentCell("platform", "none", 0, 1, 1),
                        new SegmentCell("version", "6.2", 0, 0, 1),
                        new SegmentCell("version", "6.3", 0, 0, 1),
                        new SegmentCell("version", "6.3", 0, 1, 1)),
                segments(host));
    }

    @Test
    void movesAUnitToTheSegmentsOfAnEarlierExposureThatArrivesLater() {
        CountHost host = CountHost.of(PLAN);
        host.feed(view("ada", "6.3", 9)).commit();
        host.feed(view("ada", "6.2", 8), view("ada", "6.1", 10)).end();
        assertEquals(Map.of("6.2", 1L), units(host, "version"));
    }

    @Test
    void leavesTheSegmentsOfAClickAlone() {
        CountHost host = CountHost.of(PLAN);
        host.feed(Events.with(Events.click(UPSELL, "plain", "ada", "c", 9), "version", "6.3"))
                .feed(view("ada", "6.2", 8))
                .feed(Events.with(Events.click(UPSELL, "plain", "ada", "d", 9), "version", "6.4"))
                .end();
        assertEquals(Map.of("6.2", 1L), units(host, "version"));
    }

    @Test
    void countsNothingBySegmentWhereThePlanNamesNone() {
        CountHost host = CountHost.of(Plans.plan(UPSELL).build());
        host.feed(view("ada", "6.2", 1)).end();
        assertEquals(List.of(), segments(host));
        assertTrue(host.log().live().stream().noneMatch(change -> change.key()[0] == 'g'), "nothing stored either");
    }

    @Test
    void tellsFurtherValuesAsOtherTheRarerOnesFirst() {
        CountHost host = CountHost.of(PLAN);
        for (int version = 0; version < 40; version++) {
            for (int unit = 0; unit <= version; unit++) {
                host.feed(view("u" + version + "-" + unit, "v" + version, 1));
            }
        }
        host.end();
        Map<String, Long> units = units(host, "version");
        assertEquals(SegmentTable.MOST_VALUES + 1, units.size());
        assertEquals(8 * 9 / 2, units.get("other"), "v0 to v7");
        assertEquals(40, units.get("v39"));
    }

    @Test
    void keepsTheNamesOfTheFirstWindowsWhateverComesLater() {
        CountHost host = CountHost.of(PLAN);
        for (int version = 0; version < 30; version++) {
            host.feed(view("early" + version, "v" + version, 1));
        }
        host.feed(view("tick", "v0", 60)).commit().restart(host.log().size());
        for (int unit = 0; unit < 300; unit++) {
            host.feed(view("late" + unit, "x" + unit % 100, 61));
        }
        for (int version = 0; version < 30; version++) {
            host.feed(view("again" + version, "v" + version, 62));
        }
        host.end();
        Map<String, Long> units = units(host, "version");
        assertEquals(33, units.size());
        assertEquals(2, units.get("v29"));
        assertEquals(3, units.get("x0"), "x0 and x1 are the first by name of equally many units");
        assertEquals(98 * 3, units.get("other"));
    }

    @Test
    void staysBoundedUnderAFloodOfValuesAndGoesOnAfterIt() {
        CountHost host = CountHost.of(PLAN);
        int flood = SegmentTable.MOST_TUPLES + 1_000;
        String tail = "\u26f4".repeat(56);
        for (int unit = 0; unit < flood; unit++) {
            host.feed(Events.with(
                    Events.view(UPSELL, "plain", "u" + unit, "v", 1), "version", tail + unit, "platform", tail + unit));
            if (unit % 100 == 0) {
                host.commit();
            }
        }
        host.commit();
        long batches = host.log().live().stream()
                .filter(change -> change.key()[0] == 'g')
                .count();
        assertTrue(batches <= flood / 100 + 1, batches + " batches");
        host.restart(host.log().size());
        host.feed(view("known", tail + 7, 2)).end();
        assertEquals(
                flood + 1L,
                units(host, "version").values().stream()
                        .mapToLong(Long::longValue)
                        .sum());
        assertEquals(
                1L,
                units(host, "platform").get("other") - units(host, "version").get("other") + 1);
        assertTrue(host.tallies().stream().allMatch(update -> update.windows().size() <= 2));
        int largest = host.log().changes().stream()
                .map(StateChange::value)
                .mapToInt(value -> value == null ? 0 : value.length)
                .max()
                .orElseThrow();
        assertTrue(largest < MOST_RECORD_BYTES / 2, () -> "largest state record: " + largest + " bytes");
    }

    @Test
    void keepsNothingBySegmentOnceTheExperimentIsArchived() {
        Plan other = Plans.plan("quay-banner").atMost(Duration.ofDays(9)).build();
        CountHost host = new CountHost(
                0, 1, List.of(Plans.plan(UPSELL).segments("version").build(), other), 1);
        for (int version = 0; version < 9; version++) {
            host.feed(view("u" + version, "6." + version, 5 + version)).commit();
        }
        host.feed(Events.view("quay-banner", "plain", "ada", "v", 8 * 24 * 60)).commit();
        assertTrue(host.log().live().stream().noneMatch(change -> change.key()[0] == 'g'), "stored segments are left");
        for (int cleaned = 0; cleaned <= host.log().size(); cleaned++) {
            host.restart(cleaned);
            host.feed(view("late", "6.1", 7));
            assertEquals(1, host.outcomes(UPSELL).get(Outcome.LATE), "restart from " + cleaned);
        }
    }

    @Test
    void spreadsWindowsWithManySegmentsOverSeveralUpdates() {
        Plan plan = Plans.plan(UPSELL)
                .segments("version", "platform")
                .atMost(Duration.ofDays(2))
                .build();
        CountHost host = CountHost.of(plan);
        List<Event> events = new ArrayList<>();
        for (int window = 0; window < 300; window++) {
            for (int version = 0; version < 32; version++) {
                String unit = window + "/" + version;
                events.add(view(unit, "a version of the app with a long name, number " + version, 5 * window + 1));
            }
        }
        events.forEach(host::feed);
        host.shard().endOfInput();
        List<TallyUpdate> updates = host.shard().drain().tallies();
        assertTrue(updates.size() > 1, updates.size() + " updates");
        for (TallyUpdate update : updates) {
            int bytes = update.windows().stream()
                    .flatMap(window -> window.segments().stream())
                    .mapToInt(cell -> cell.field().length() + cell.value().length() + 80)
                    .sum();
            assertTrue(
                    bytes < MOST_RECORD_BYTES,
                    bytes + " bytes in " + update.windows().size() + " windows");
        }
    }
}
