package io.tallyward.service.watch;

import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Random;
import org.apache.kafka.clients.producer.ProducerRecord;

/**
 * A small seeded stream of {@code quay-banner} events in which {@code wide} is much better: one unit every ten seconds for
 * a day and a half of event time, with repeated views, clicks out of order within grace, crossovers and garbage.
 */
final class LiveStream {

    static final Instant START = Instant.parse("2026-05-04T00:00:00Z");
    static final Duration RUN = Duration.ofHours(36);

    /** The run's end plus attribution and grace of the plan: an event this late seals the last window of its partition. */
    static final Duration SEALED = RUN.plusMinutes(50);

    static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            count: {by: unit, attribution: PT30M, grace: PT10M, window: PT5M}
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, sides: two, power: 0.8, baseline: 0.1, smallest-effect: 0.02, spending: obrien-fleming}
            looks: {every: PT3H}
            run: {from: 2026-05-04T00:00:00Z, at-most: PT36H}
            """;

    /** A second experiment that runs longer, so that its events move the watermark past the end of the first. */
    static final String LONGER_PLAN = PLAN.replace("quay-banner", "fare-chip").replace("PT36H", "PT72H");

    /** A third one, whose split is broken: from {@link #BREAK} on, version 6.3 loses every view of {@code wide}. */
    static final String BROKEN_PLAN =
            PLAN.replace("quay-banner", "cabin-upsell") + "split-check: {segments: [version, platform]}\n";

    static final Instant BREAK = START.plus(Duration.ofHours(12));

    private static final String[] VERSIONS = {"6.1", "6.2", "6.3"};

    private final String topic;
    private final Random random;
    private final List<ProducerRecord<byte[], byte[]>> records = new ArrayList<>();

    private LiveStream(String topic, long seed) {
        this.topic = topic;
        this.random = new Random(seed);
    }

    static List<ProducerRecord<byte[], byte[]>> of(String topic, int partitions, long seed) {
        LiveStream stream = new LiveStream(topic, seed);
        for (int unit = 0; unit < 12_960; unit++) {
            stream.unit(unit, START.plusSeconds(10L * unit));
            stream.brokenUnit(unit, START.plusSeconds(10L * unit));
        }
        for (int partition = 0; partition < partitions; partition++) {
            stream.add(partition, "view", "fare-chip", "plain", "last-" + partition, START.plus(SEALED));
        }
        return stream.records;
    }

    /**
     * The same stream with its clicks in a topic of their own, views first. Both topics end with an event in every partition
     * that seals all windows.
     */
    static List<ProducerRecord<byte[], byte[]>> split(String views, String clicks, int partitions, long seed) {
        List<ProducerRecord<byte[], byte[]>> viewRecords = new ArrayList<>();
        List<ProducerRecord<byte[], byte[]>> clickRecords = new ArrayList<>();
        for (ProducerRecord<byte[], byte[]> record : of(views, partitions, seed)) {
            String json = new String(record.value(), StandardCharsets.UTF_8);
            if (json.contains("\"kind\":\"click\"")) {
                clickRecords.add(new ProducerRecord<>(clicks, record.partition(), record.key(), record.value()));
            } else {
                viewRecords.add(record);
            }
        }
        LiveStream last = new LiveStream(clicks, seed);
        for (int partition = 0; partition < partitions; partition++) {
            last.add(partition, "click", "fare-chip", "plain", "last-click-" + partition, START.plus(SEALED));
        }
        viewRecords.addAll(clickRecords);
        viewRecords.addAll(last.records);
        return viewRecords;
    }

    private void unit(int number, Instant at) {
        String variant = random.nextBoolean() ? "wide" : "plain";
        String unit = "visitor-" + number;
        double rate = variant.equals("wide") ? 0.13 : 0.1;
        boolean clickFirst = random.nextInt(10) == 0;
        boolean clicks = random.nextDouble() < rate;
        if (clicks && clickFirst) {
            add(null, "click", "quay-banner", variant, unit, at.plusSeconds(60));
        }
        add(null, "view", "quay-banner", variant, unit, at);
        if (random.nextInt(20) == 0) {
            add(null, "view", "quay-banner", variant, unit, at.plusSeconds(30));
        }
        if (clicks && !clickFirst) {
            add(null, "click", "quay-banner", variant, unit, at.plusSeconds(90));
        }
        if (random.nextInt(200) == 0) {
            add(null, "view", "quay-banner", variant.equals("wide") ? "plain" : "wide", unit, at.plusSeconds(120));
        }
        if (number % 1000 == 0) {
            records.add(new ProducerRecord<>(topic, null, bytes(unit), bytes("{not json")));
        }
    }

    /** What a unit does is told by its number alone. */
    private void brokenUnit(int number, Instant at) {
        Random own = new Random(number);
        String version = VERSIONS[own.nextInt(3)];
        String variant = own.nextBoolean() ? "wide" : "plain";
        if (version.equals("6.3") && variant.equals("wide") && !at.isBefore(BREAK)) {
            return;
        }
        String unit = "passenger-" + number;
        String segments = own.nextInt(50) == 0
                ? "null"
                : "{\"platform\":\"" + (own.nextBoolean() ? "phone" : "tabl\\u0065t") + "\",\"language\":\"l" + number
                        + "\",\"version\":\"" + version + "\"}";
        String json = String.format(
                "{\"kind\":\"view\",\"experiment\":\"cabin-upsell\",\"segments\":%s,\"variant\":\"%s\",\"unit\":\"%s\","
                        + "\"id\":\"b%d\",\"at\":\"%s\"}",
                segments, variant, unit, number, at);
        records.add(new ProducerRecord<>(topic, null, bytes(unit), bytes(json)));
    }

    private void add(Integer partition, String kind, String experiment, String variant, String unit, Instant at) {
        String json = String.format(
                "{\"kind\":\"%s\",\"experiment\":\"%s\",\"variant\":\"%s\",\"unit\":\"%s\",\"id\":\"e%d\",\"at\":\"%s\"}",
                kind, experiment, variant, unit, records.size(), at);
        records.add(new ProducerRecord<>(topic, partition, bytes(unit), bytes(json)));
    }

    private static byte[] bytes(String text) {
        return text.getBytes(StandardCharsets.UTF_8);
    }
}
