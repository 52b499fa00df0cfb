package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.Checked;
import io.tallyward.service.plan.PlanReader;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Locale;
import java.util.Random;

/**
 * A seeded plan of any kind, drawn as a plan file and read as one, and a log that leads to looks under it: events in disorder,
 * repeats, copies, crossovers, orphans, changes of the split.
 */
final class RandomExperiment {

    private static final Instant FROM = Instant.parse("2026-05-04T00:00:00Z");

    private final Random random;
    private final Plan plan;
    private final List<Line> lines = new ArrayList<>();
    private int ids;

    /**
     * One line of a log.
     *
     * @param arrival when it arrives, in milliseconds since the epoch
     * @param text the JSON document, or what comes in its place
     */
    record Line(long arrival, String text) {}

    /**
     * An experiment and its log.
     *
     * @param wild whether events may be late, of a clock that is ahead, of unknown names, or no events at all
     */
    RandomExperiment(long seed, boolean wild) {
        random = new Random(seed);
        plan = plan();
        int units = 150 + random.nextInt(450);
        for (int unit = 0; unit < units; unit++) {
            unit(unit, wild);
        }
        if (wild) {
            long end = plan.run().end().toEpochMilli();
            lines.add(new Line(end, "{\"kind\":"));
            lines.add(new Line(end, event("view", "no-such-variant", "u0", at(0.5), "")));
            lines.add(new Line(
                    end,
                    event("view", plan.control().name(), "u0", end + 3_600_000, "")
                            .replace("}", ",\"received\":\"" + plan.run().end() + "\"}")));
        }
        lines.sort(Comparator.comparingLong(Line::arrival));
    }

    Plan plan() {
        if (plan != null) {
            return plan;
        }
        while (true) {
            Checked<Plan> checked = PlanReader.parse("random.yaml", text());
            if (checked.value().isPresent()) {
                return checked.value().get();
            }
        }
    }

    /** The lines in the order they arrive. */
    List<String> lines() {
        return lines.stream().map(Line::text).toList();
    }

    /** The lines in another order, in which none is overtaken by one that is younger by more than the grace. */
    List<String> reordered(long seed) {
        Random order = new Random(seed);
        long grace = plan.count().grace().toMillis();
        record Delayed(Line line, long key) {}
        return lines.stream()
                .map(line -> new Delayed(line, eventTime(line.text()) + order.nextLong(grace)))
                .sorted(Comparator.comparingLong(Delayed::key))
                .map(delayed -> delayed.line().text())
                .toList();
    }

    private static long eventTime(String line) {
        return Instant.parse(line.replaceAll(".*\"at\":\"([^\"]*)\".*", "$1")).toEpochMilli();
    }

    private String text() {
        int variants = random.nextInt(4) == 0 ? 3 : 2;
        boolean two = random.nextInt(3) > 0;
        StringBuilder text = new StringBuilder("""
                experiment: random-walk
                question: does it?
                owner: owner@northwater.example
                """);
        add(text, "better: %s", pick("higher", "higher", "lower"));
        add(
                text,
                "count: {by: %s, attribution: %s, grace: %s, window: %s}",
                pick("unit", "view"),
                pick("PT5M", "PT20M", "PT1H"),
                pick("PT1M", "PT5M", "PT15M"),
                pick("PT5M", "PT10M", "PT30M"));
        add(text, "variants: %s", shares(variants, true));
        add(
                text,
                "test: {alpha: %s, sides: %s, power: 0.8, baseline: %s, smallest-effect: %s, spending: %s,"
                        + " alpha-sharing: %s, clock: %s, information: %s%s}",
                pick("0.05", "0.1", "0.01"),
                two ? "two" : "one",
                pick("0.2", "0.3", "0.45"),
                pick("0.1", "0.2", "{relative: 0.4}"),
                spending(),
                pick("pass-on", "split"),
                pick("information", "calendar"),
                pick("observed", "observed", "trials"),
                two && random.nextBoolean() ? ", harm: {spending: " + spending() + ", silent-before: 0.2}" : "");
        add(text, "looks: %s", pick("{every: PT1H}", "{every: PT2H}", "{fractions: [0.3, 0.6, 1]}"));
        if (random.nextBoolean()) {
            add(
                    text,
                    "futility: %s",
                    pick(
                            "{spending: " + spending() + "}",
                            "{conditional-power: 0.1, under: trend}",
                            "{predictive-power: 0.05}"));
        }
        add(text, "split-check: {alpha: %s, segments: [version]}", pick("0.001", "0.05"));
        add(text, "trust: {crossover-share: %s, starved-after: %s}", pick("0.01", "0.2"), pick("PT30M", "PT6H"));
        add(text, "run: {from: %s, at-least: %s, at-most: %s}", FROM, pick("PT0S", "PT3H"), pick("PT6H", "PT10H"));
        if (random.nextInt(3) == 0) {
            add(text, "epochs: [{from: 2026-05-04T02:30:00Z, shares: %s}]", shares(variants, false));
        }
        return text.toString();
    }

    private static void add(StringBuilder text, String format, Object... values) {
        text.append(String.format(Locale.ROOT, format, values)).append('\n');
    }

    private String shares(int variants, boolean withControl) {
        int[] hundredths = variants == 2
                ? (random.nextBoolean() ? new int[] {50, 50} : new int[] {70, 30})
                : (random.nextBoolean() ? new int[] {40, 30, 30} : new int[] {50, 25, 25});
        List<String> parts = new ArrayList<>();
        for (int i = 0; i < variants; i++) {
            String share = "0." + hundredths[i];
            parts.add("v" + i + ": " + (withControl ? "{share: " + share + ", control: " + (i == 0) + "}" : share));
        }
        return "{" + String.join(", ", parts) + "}";
    }

    private String spending() {
        return pick(
                "obrien-fleming",
                "pocock",
                "{hwang-shih-decani: -3}",
                "{kim-demets: 2}",
                "{table: {0.25: 0.1, 0.6: 0.4, 1: 1}}");
    }

    private void unit(int number, boolean wild) {
        long at = at(random.nextDouble());
        double[] shares = plan.sharesIn(plan.epochAt(at));
        List<Variant> variants = plan.variants();
        int variant = 0;
        for (double left = random.nextDouble() - shares[0]; left > 0 && variant < variants.size() - 1; variant++) {
            left -= shares[variant + 1];
        }
        String name = variants.get(variant).name();
        String unit = "u" + number;
        double rate = 0.2 + 0.12 * variant;
        int views = 1 + random.nextInt(3);
        for (int view = 0; view < views; view++) {
            long shown = at + view * random.nextLong(1_200_000);
            String id = add("view", name, unit, shown, "", wild);
            if (random.nextDouble() < rate) {
                long clicked =
                        shown + random.nextLong(2 * plan.count().attribution().toMillis());
                add("click", name, unit, clicked, random.nextBoolean() ? id : "", wild);
            }
        }
        if (random.nextInt(60) == 0) {
            add("view", variants.get((variant + 1) % variants.size()).name(), unit, at + 1_000, "", wild);
        }
        if (random.nextInt(40) == 0) {
            add("click", name, "lost" + number, at, "", wild);
        }
    }

    private String add(String kind, String variant, String unit, long at, String view, boolean wild) {
        String text = event(kind, variant, unit, at, view);
        lines.add(new Line(at + delay(wild), text));
        if (random.nextInt(25) == 0) {
            lines.add(new Line(at + delay(wild), text));
        }
        return "e" + ids;
    }

    private long delay(boolean wild) {
        long grace = plan.count().grace().toMillis();
        return wild && random.nextInt(15) == 0 ? random.nextLong(10_800_000) : random.nextLong(grace);
    }

    private String event(String kind, String variant, String unit, long at, String view) {
        ids++;
        return String.format(
                "{\"kind\":\"%s\",\"experiment\":\"random-walk\",\"variant\":\"%s\",\"unit\":\"%s\",\"id\":\"e%d\","
                        + "\"at\":\"%s\"%s,\"segments\":{\"version\":\"%d\"}}",
                kind,
                variant,
                unit,
                ids,
                Instant.ofEpochMilli(at),
                view.isEmpty() ? "" : ",\"view\":\"" + view + "\"",
                unit.hashCode() & 3);
    }

    /** A moment of the run, or a little outside of it. */
    private long at(double part) {
        long length = Duration.between(FROM, plan.run().end()).toMillis();
        return FROM.toEpochMilli() + Math.round(length * (1.04 * part - 0.02));
    }

    private String pick(String... choices) {
        return choices[random.nextInt(choices.length)];
    }
}
