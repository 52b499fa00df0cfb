package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.shard.StateChange;
import java.time.Duration;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

/** What keeps a shard small and its state consistent whatever the traffic. */
class CountBoundsTest {

    /** A usual broker refuses records above 1 MB; state records promise to stay below half of it. */
    private static final int MOST_STATE_BYTES = 512 * 1024;

    private static final int BOT_CLICKS = 100_000;
    private static final Plan PLAN = Plans.plan("quay-banner").build();
    private static final CountSettings SETTINGS =
            new CountSettings(Duration.ofMinutes(5), Duration.ofMinutes(5), new byte[] {1});

    private static CountShard shard(int partitions) {
        return new CountShard(0, partitions, List.of(PLAN), SETTINGS, List.of("events"));
    }

    @Test
    void keepsStateSmallHoweverOftenOneUnitClicks() {
        CountShard shard = shard(1);
        long at = Events.at(1);
        shard.apply(0, at, Events.view("quay-banner", "wide", "bot", "v", 1));
        for (int click = 0; click < BOT_CLICKS; click++) {
            shard.apply(0, at, Events.click("quay-banner", "wide", "bot", "c" + click, 2));
        }
        int largest = shard.drain().state().stream()
                .mapToInt(change -> change.value() == null ? 0 : change.value().length)
                .max()
                .orElseThrow();
        assertTrue(largest < MOST_STATE_BYTES, () -> "largest state record: " + largest + " bytes");

        shard.endOfInput();
        OutcomeCounts outcomes = shard.view().experiments().get("quay-banner").outcomes();
        assertEquals(1, outcomes.get(Outcome.TRIAL));
        assertEquals(1, outcomes.get(Outcome.SUCCESS));
        assertEquals(BOT_CLICKS - 1, outcomes.get(Outcome.REPEAT));
    }

    @Test
    void losesNoEventOfABotThatIsNeverExposed() {
        CountShard shard = shard(1);
        for (int click = 0; click < BOT_CLICKS; click++) {
            shard.apply(0, Events.at(2), Events.click("quay-banner", "wide", "bot", "c" + click, 2));
        }
        assertEquals(BOT_CLICKS, shard.view().experiments().get("quay-banner").openEvents());
        shard.endOfInput();
        assertEquals(
                BOT_CLICKS,
                shard.view().experiments().get("quay-banner").outcomes().get(Outcome.ORPHAN));
    }

    @Test
    void refusesStateOfAnotherNumberOfPartitions() {
        CountShard before = shard(4);
        before.apply(0, Events.at(1), Events.view("quay-banner", "wide", "u", "v", 1));
        List<StateChange> state = before.drain().state();
        CountShard after = shard(5);
        PartitionsChangedException refused = assertThrows(
                PartitionsChangedException.class,
                () -> state.forEach(change -> after.restore(change.key(), change.value())));
        assertEquals(
                "input topics: 5 partitions (expected: 4, as when counting began); units have moved between partitions, so"
                        + " their counts can no longer be told apart; run the experiments anew under another name in the"
                        + " configuration",
                refused.getMessage());
    }

    @ParameterizedTest
    @ValueSource(booleans = {false, true})
    void forgetsAMillionOrphansOnceTheirWindowIsSealed(boolean byView) {
        Plans plan = Plans.plan("quay-banner");
        CountHost host = CountHost.of(byView ? plan.byView().build() : plan.build());
        int orphans = 1_000_000;
        for (int i = 0; i < orphans; i++) {
            host.feed(Events.click("quay-banner", "wide", "nobody-" + i, "c" + i, 1));
            if (i % 100_000 == 0) {
                host.commit();
            }
        }
        host.feed(Events.view("quay-banner", "wide", "ada", "v", 45)).commit();
        assertEquals(orphans, host.outcomes("quay-banner").get(Outcome.ORPHAN));
        assertEquals(1, host.openEvents("quay-banner"));
        assertEquals(1, host.shard().view().experiments().get("quay-banner").units());
        long live = host.log().live().stream()
                .filter(change -> change.key()[0] == 'o')
                .count();
        assertEquals(1, live, "open entries left in a log that is compacted");
    }
}
