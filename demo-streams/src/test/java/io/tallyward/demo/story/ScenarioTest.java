package io.tallyward.demo.story;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.demo.stream.EventJson;
import java.nio.charset.StandardCharsets;
import java.security.MessageDigest;
import java.time.Duration;
import java.util.HashMap;
import java.util.HashSet;
import java.util.HexFormat;
import java.util.List;
import java.util.Map;
import java.util.Set;
import org.junit.jupiter.api.Test;

class ScenarioTest {

    private final Scenario scenario = ToldScenario.withDefaultSeed();

    @Test
    void sameSeedGivesTheSameBytesAndAnotherSeedOthers() throws Exception {
        String hash = hash(scenario);
        assertEquals(hash, hash(Scenario.of(Scenario.DEFAULT_SEED)));
        assertNotEquals(hash, hash(Scenario.of(Scenario.DEFAULT_SEED + 1)));
    }

    @Test
    void hasTheSizeOfTwoWeeksOfTraffic() {
        assertTrue(scenario.events().size() > 500_000, () -> scenario.events().size() + " events");
        assertTrue(scenario.events().size() < 700_000, () -> scenario.events().size() + " events");
    }

    @Test
    void arrivesInOrderWithinTheStream() {
        long previous = Long.MIN_VALUE;
        for (StreamEvent event : scenario.events()) {
            assertTrue(event.receivedMillis() >= previous);
            previous = event.receivedMillis();
        }
        assertTrue(scenario.events().get(0).receivedMillis() >= Northwater.START.toEpochMilli());
        assertTrue(previous <= Northwater.STREAM_END.toEpochMilli());
    }

    @Test
    void idsRepeatOnlyInExactDuplicates() {
        Map<Long, StreamEvent> seen = new HashMap<>();
        int duplicates = 0;
        for (StreamEvent event : scenario.events()) {
            StreamEvent earlier = seen.putIfAbsent(event.id(), event);
            if (earlier != null) {
                duplicates++;
                assertEquals(new String(EventJson.record(earlier)), new String(EventJson.record(event)));
            }
        }
        assertTrue(duplicates > 5_000, duplicates + " duplicates");
    }

    @Test
    void everyFlawAndEveryDisturbanceOccurs() {
        Set<Flaw> flaws = new HashSet<>();
        int late = 0;
        int fastClocks = 0;
        int slow = 0;
        for (StreamEvent event : scenario.events()) {
            flaws.add(event.flaw());
            long delay = event.receivedMillis() - event.atMillis();
            late += event.late() ? 1 : 0;
            fastClocks += event.flaw() == Flaw.NONE && delay < 0 ? 1 : 0;
            slow += !event.late() && delay > Duration.ofMinutes(5).toMillis() ? 1 : 0;
        }
        assertEquals(Set.of(Flaw.values()), flaws);
        assertTrue(late > 1_000, late + " late");
        assertTrue(fastClocks > 500, fastClocks + " fast clocks");
        assertTrue(slow > 3_000, slow + " slow");
    }

    @Test
    void onlyBadClocksRunAheadOfWhatIsTolerated() {
        for (StreamEvent event : scenario.events()) {
            long ahead = event.atMillis() - event.receivedMillis();
            assertEquals(
                    event.flaw() == Flaw.CLOCK_AHEAD,
                    ahead > Northwater.MAX_SKEW.toMillis(),
                    () -> event + " is " + ahead + " ms ahead");
        }
    }

    @Test
    void unitsTakePartInSeveralExperiments() {
        Map<String, Set<String>> experiments = new HashMap<>();
        scenario.events()
                .forEach(event -> experiments
                        .computeIfAbsent(event.subject().unit(), unit -> new HashSet<>())
                        .add(event.subject().experiment()));
        assertTrue(experiments.values().stream().anyMatch(set -> set.size() >= 5));
    }

    @Test
    void splitFollowsThePlannedEpochs() {
        Story chip = scenario.stories().get(1);
        assertEquals(0, chip.epochAt(Northwater.START.plus(Duration.ofDays(7)).toEpochMilli() - 1));
        assertEquals(1, chip.epochAt(Northwater.START.plus(Duration.ofDays(7)).toEpochMilli()));
        assertEquals(List.of("bare", "chip"), chip.variants());
    }

    private static String hash(Scenario scenario) throws Exception {
        MessageDigest digest = MessageDigest.getInstance("SHA-256");
        for (StreamEvent event : scenario.events()) {
            digest.update(EventJson.record(event));
            digest.update(Long.toString(event.receivedMillis()).getBytes(StandardCharsets.US_ASCII));
        }
        return HexFormat.of().formatHex(digest.digest());
    }
}
