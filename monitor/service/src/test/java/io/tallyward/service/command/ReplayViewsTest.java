package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Random;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** Views from an event file to the record of a look, against sums and variances taken straight from the list of events. */
class ReplayViewsTest {

    private static final String PLAN = """
            experiment: board-news
            question: do longer news on the departure board bring more clicks a view?
            owner: web-growth@northwater.example
            count: {by: view, attribution: PT30M, grace: PT10M, window: PT5M}
            variants: {short: {share: 0.5, control: true}, long: {share: 0.5}}
            test: {alpha: 0.05, baseline: 0.2, smallest-effect: 0.05}
            looks: {every: PT1H}
            run: {from: 2026-05-04T00:00:00Z, at-most: PT4H}
            """;

    private static final long SEED = 20260504;
    private static final int UNITS = 400;
    private static final List<String> VARIANTS = List.of("short", "long");
    private static final Instant START = Instant.parse("2026-05-04T00:00:00Z");
    private static final Instant END = START.plus(Duration.ofHours(4));
    private static final Duration TO_CLICK = Duration.ofMinutes(1);

    private record View(int unit, String id, Instant at, boolean clicked) {
        String variant() {
            return VARIANTS.get(unit % 2);
        }

        String line(String kind, String eventId, Instant when, String more) {
            return "{\"kind\":\"" + kind + "\",\"experiment\":\"board-news\",\"variant\":\"" + variant()
                    + "\",\"unit\":\"u" + unit + "\",\"id\":\"" + eventId + "\",\"at\":\"" + when + "\"" + more + "}";
        }
    }

    @TempDir
    Path directory;

    private static List<View> views() {
        Random random = new Random(SEED);
        List<View> views = new ArrayList<>();
        for (int unit = 0; unit < UNITS; unit++) {
            double propensity = random.nextBoolean() ? 0.05 : 0.4;
            int count = 1 + random.nextInt(8);
            for (int i = 0; i < count; i++) {
                Instant at = START.plusSeconds(random.nextInt(4 * 3600));
                boolean clicked = random.nextDouble() < propensity;
                // A click after the end of the run is outside of it.
                views.add(new View(
                        unit,
                        "v" + unit + "-" + i,
                        at,
                        clicked && at.plus(TO_CLICK).isBefore(END)));
            }
        }
        return views;
    }

    @Test
    void recordsSumsVarianceAndStatisticOfTheEvents() throws IOException {
        List<View> views = views();
        List<String> lines = new ArrayList<>();
        List<View> inOrder = new ArrayList<>(views);
        inOrder.sort(Comparator.comparing(View::at));
        for (View view : inOrder) {
            lines.add(view.line("view", view.id(), view.at(), ""));
            lines.add(view.line("view", view.id(), view.at(), ""));
            if (view.clicked()) {
                lines.add(view.line(
                        "click", "c" + view.id(), view.at().plus(TO_CLICK), ",\"view\":\"" + view.id() + "\""));
            }
        }
        JsonNode look = lastLook(lines);
        Instant end = Instant.parse(look.get("windowEnd").asText());
        assertTrue(Duration.between(START, end).toHours() >= 1, end.toString());
        Arm[] arms = {new Arm(), new Arm()};
        for (int unit = 0; unit < UNITS; unit++) {
            int own = unit;
            List<View> counted = views.stream()
                    .filter(view -> view.unit() == own && view.at().isBefore(end))
                    .toList();
            if (!counted.isEmpty()) {
                arms[unit % 2].add(
                        counted.size(), counted.stream().filter(View::clicked).count());
            }
        }
        for (int variant = 0; variant < 2; variant++) {
            assertEquals(arms[variant].counts(), counts(look.get("counts").get(variant)), VARIANTS.get(variant));
        }
        JsonNode comparison = look.get("comparisons").get(0);
        double difference = arms[1].rate() - arms[0].rate();
        double variance = arms[1].variance() + arms[0].variance();
        assertEquals(difference, comparison.get("difference").asDouble(), 1e-12);
        assertEquals(1 / variance, comparison.get("information").asDouble(), 1e-9 / variance);
        assertEquals(difference / Math.sqrt(variance), comparison.get("z").asDouble(), 1e-9);
        double binomial = arms[1].binomial() + arms[0].binomial();
        assertEquals(
                variance / binomial,
                comparison.get("clustering").get("designEffect").asDouble(),
                1e-9);
        assertTrue(variance > 1.2 * binomial, "views of a unit resemble each other");
    }

    private JsonNode lastLook(List<String> lines) throws IOException {
        Path plans = Files.createDirectory(directory.resolve("plans"));
        Files.writeString(plans.resolve("board-news.yaml"), PLAN);
        Path events = Files.write(directory.resolve("events.jsonl"), lines);
        CommandRun run = CommandRun.of("replay", "--plans", plans.toString(), "--events", events.toString(), "--json");
        assertEquals(0, run.status(), run.toString());
        List<String> decisions = run.ofType("decision");
        return new ObjectMapper().readTree(decisions.get(decisions.size() - 1));
    }

    private static List<Long> counts(JsonNode count) {
        JsonNode totals = count.get("unitTotals");
        return List.of(
                totals.get("units").asLong(),
                count.get("trials").asLong(),
                count.get("successes").asLong(),
                totals.get("trialSquares").asLong(),
                totals.get("products").asLong(),
                totals.get("successSquares").asLong());
    }

    /** The units of a variant: views and clicked views of each. */
    private static final class Arm {
        private final List<long[]> units = new ArrayList<>();

        void add(long views, long clicked) {
            units.add(new long[] {views, clicked});
        }

        private long sum(int one, int other) {
            return units.stream().mapToLong(unit -> unit[one] * unit[other]).sum();
        }

        private long sum(int one) {
            return units.stream().mapToLong(unit -> unit[one]).sum();
        }

        List<Long> counts() {
            return List.of((long) units.size(), sum(0), sum(1), sum(0, 0), sum(0, 1), sum(1, 1));
        }

        double rate() {
            return (double) sum(1) / sum(0);
        }

        /** From the residuals of the units, one by one. */
        double variance() {
            double squares = 0;
            for (long[] unit : units) {
                double residual = unit[1] - rate() * unit[0];
                squares += residual * residual;
            }
            double n = units.size();
            return n / (n - 1) * squares / sum(0) / sum(0);
        }

        double binomial() {
            return rate() * (1 - rate()) / sum(0);
        }
    }
}
