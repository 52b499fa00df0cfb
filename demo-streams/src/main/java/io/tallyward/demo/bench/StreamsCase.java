package io.tallyward.demo.bench;

import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.demo.bench.CaseMain.Task;
import io.tallyward.demo.stream.InputTopic;
import io.tallyward.engine.event.Event;
import java.time.Duration;
import java.util.Properties;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.atomic.AtomicLong;
import org.apache.kafka.common.serialization.Serdes;
import org.apache.kafka.streams.KafkaStreams;
import org.apache.kafka.streams.KeyValue;
import org.apache.kafka.streams.StreamsBuilder;
import org.apache.kafka.streams.StreamsConfig;
import org.apache.kafka.streams.kstream.Consumed;
import org.apache.kafka.streams.kstream.Produced;
import org.apache.kafka.streams.kstream.Repartitioned;
import org.apache.kafka.streams.kstream.TimeWindows;

/**
 * The same windows, counted with the Kafka Streams DSL as its documentation shows it: events of each kind by experiment and
 * variant. It knows no units: a duplicate counts twice, and a click counts whatever it follows.
 */
final class StreamsCase {

    private static final Duration WINDOW = Duration.ofMinutes(5);
    private static final Duration GRACE = Duration.ofMinutes(40);
    private static final int MAX_EVENT_BYTES = 65_536;
    private static final long LOOK_MILLIS = 10;

    private StreamsCase() {}

    static Measurement measure(Task task) throws InterruptedException {
        String result = "streams-" + task.run();
        InputTopic.create(task.bootstrapServers(), result, BenchRun.PARTITIONS);
        AtomicLong counted = new AtomicLong();
        Stopwatch stopwatch = new Stopwatch(task.warmUp());
        try (KafkaStreams streams =
                new KafkaStreams(topology(task.topic(), result, counted).build(), settings(task, result))) {
            streams.start();
            while (counted.get() < task.events()) {
                if (streams.state().hasStartedOrFinishedShuttingDown()) {
                    throw new IllegalStateException("the stream has stopped: " + streams.state());
                }
                TimeUnit.MILLISECONDS.sleep(LOOK_MILLIS);
                stopwatch.passed(counted.get());
            }
            Measurement measurement = stopwatch.stop(counted.get());
            System.out.println("dropped as late: " + Math.round(dropped(streams)));
            return measurement;
        }
    }

    private static StreamsBuilder topology(String topic, String result, AtomicLong counted) {
        JsonEventReader reader = new JsonEventReader(EventMapping.DEFAULT, MAX_EVENT_BYTES);
        StreamsBuilder builder = new StreamsBuilder();
        builder.stream(topic, Consumed.with(Serdes.ByteArray(), Serdes.ByteArray()))
                .map((unit, value) -> KeyValue.pair(cell(reader.read(value)), value))
                .repartition(Repartitioned.with(Serdes.String(), Serdes.ByteArray())
                        .withName("cells")
                        .withNumberOfPartitions(BenchRun.PARTITIONS))
                .peek((cell, value) -> counted.incrementAndGet())
                .groupByKey()
                .windowedBy(TimeWindows.ofSizeAndGrace(WINDOW, GRACE))
                .count()
                .toStream(
                        (window, count) -> window.key() + "@" + window.window().start())
                .to(result, Produced.with(Serdes.String(), Serdes.Long()));
        return builder;
    }

    private static String cell(Decoded decoded) {
        Event event = ((Decoded.Accepted) decoded).event();
        return event.experiment() + "/" + event.variant() + "/" + event.kind();
    }

    private static Properties settings(Task task, String application) {
        Properties settings = new Properties();
        settings.put(StreamsConfig.APPLICATION_ID_CONFIG, application);
        settings.put(StreamsConfig.BOOTSTRAP_SERVERS_CONFIG, task.bootstrapServers());
        settings.put(
                StreamsConfig.STATE_DIR_CONFIG,
                task.directory().resolve(application).toString());
        settings.put(StreamsConfig.PROCESSING_GUARANTEE_CONFIG, StreamsConfig.EXACTLY_ONCE_V2);
        settings.put(StreamsConfig.COMMIT_INTERVAL_MS_CONFIG, 1_000);
        settings.put(StreamsConfig.consumerPrefix("auto.offset.reset"), "earliest");
        return settings;
    }

    private static double dropped(KafkaStreams streams) {
        return streams.metrics().entrySet().stream()
                .filter(metric -> metric.getKey().name().equals("dropped-records-total"))
                .mapToDouble(metric -> ((Number) metric.getValue().metricValue()).doubleValue())
                .sum();
    }
}
