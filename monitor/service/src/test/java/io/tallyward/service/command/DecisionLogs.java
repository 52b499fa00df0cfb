package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Random;

/** Logs of decisions as a replay of drawn events writes them. */
final class DecisionLogs {

    private static final Instant FROM = Instant.parse("2026-05-04T00:00:00Z");

    private DecisionLogs() {}

    /** A banner that does better: the plan, looks and a stop; one JSON document per line. */
    static List<String> quayBanner(Path directory) throws IOException {
        return log(directory, 0.5, 0.2, 0.245);
    }

    /**
     * A run of two days in which 200 units arrive each hour.
     *
     * @param share actual share of {@code wide}
     * @param plainRate chance that a unit clicks which sees {@code plain}
     * @param wideRate the same for {@code wide}
     */
    static List<String> log(Path directory, double share, double plainRate, double wideRate) throws IOException {
        Path plans = Files.createDirectories(directory.resolve("plans"));
        Files.writeString(plans.resolve("quay-banner.yaml"), """
                experiment: quay-banner
                question: does the wide quay photo bring more timetable clicks?
                owner: web-growth@northwater.example
                count: {by: unit, attribution: PT30M, grace: PT10M, window: PT5M}
                variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
                test: {alpha: 0.05, sides: two, power: 0.8, baseline: 0.2, smallest-effect: 0.03,
                       spending: obrien-fleming}
                looks: {every: PT6H}
                run: {from: 2026-05-04T00:00:00Z, at-most: P2D}
                """);
        Random random = new Random(11);
        List<String> events = new ArrayList<>();
        for (int unit = 0; unit < 48 * 200; unit++) {
            Instant at = FROM.plus(Duration.ofSeconds(18L * unit));
            boolean wide = random.nextDouble() < share;
            events.add(event("view", wide, unit, at));
            if (random.nextDouble() < (wide ? wideRate : plainRate)) {
                events.add(event("click", wide, unit, at.plusSeconds(5)));
            }
        }
        Path file = Files.write(directory.resolve("events.jsonl"), events);
        CommandRun run = CommandRun.of("replay", "--plans", plans.toString(), "--events", file.toString(), "--json");
        assertEquals(0, run.status(), run.err().toString());
        return run.ofType("decision");
    }

    private static String event(String kind, boolean wide, int unit, Instant at) {
        return "{\"kind\":\"%s\",\"experiment\":\"quay-banner\",\"variant\":\"%s\",\"unit\":\"u%d\",\"id\":\"%s%d\",\"at\":\"%s\"}"
                .formatted(kind, wide ? "wide" : "plain", unit, kind, unit, at);
    }
}
