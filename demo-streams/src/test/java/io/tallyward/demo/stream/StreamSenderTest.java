package io.tallyward.demo.stream;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.StreamEvent;
import io.tallyward.demo.story.ToldScenario;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.List;
import java.util.concurrent.atomic.AtomicLong;
import org.apache.kafka.clients.producer.MockProducer;
import org.apache.kafka.common.serialization.ByteArraySerializer;
import org.junit.jupiter.api.Test;

class StreamSenderTest {

    private final List<StreamEvent> events =
            ToldScenario.withDefaultSeed().events().subList(0, 500);

    @Test
    void endsWhenItsThreadIsInterruptedAndStaysInterrupted() {
        StreamSender sender = new StreamSender(producer(true), "northwater-events");
        Pace pace = new Pace(Duration.ZERO, System::nanoTime);
        Thread.currentThread().interrupt();
        IllegalStateException failure = assertThrows(
                IllegalStateException.class, () -> sender.send(events, pace, (event, count) -> assertEquals(0, count)));
        assertTrue(failure.getMessage().contains("interrupted"), failure.getMessage());
        sender.close();
        assertTrue(Thread.interrupted());
    }

    @Test
    void keysByUnitAndStampsWithArrival() {
        MockProducer<byte[], byte[]> producer = producer(true);
        AtomicLong sent = new AtomicLong();
        try (StreamSender sender = new StreamSender(producer, "northwater-events")) {
            sender.send(events, new Pace(Duration.ZERO, System::nanoTime), (event, count) -> sent.set(count));
        }
        assertEquals(500, sent.get());
        for (int i = 0; i < events.size(); i++) {
            assertEquals(
                    events.get(i).receivedMillis(), producer.history().get(i).timestamp());
            assertEquals(
                    events.get(i).subject().unit(),
                    new String(producer.history().get(i).key(), StandardCharsets.UTF_8));
        }
    }

    @Test
    void failsWhenARecordIsRefused() {
        MockProducer<byte[], byte[]> producer = producer(false);
        try (StreamSender sender = new StreamSender(producer, "northwater-events")) {
            StreamSender.Progress refuse = (event, count) -> producer.errorNext(new IllegalStateException("full"));
            Pace pace = new Pace(Duration.ZERO, System::nanoTime);
            assertThrows(IllegalStateException.class, () -> sender.send(events, pace, refuse));
        }
    }

    @Test
    void paceSpreadsFourteenDaysEvenly() {
        AtomicLong clock = new AtomicLong(1_000);
        Pace pace = new Pace(Duration.ofSeconds(14), clock::get);
        long dayFive = Northwater.START.plus(Duration.ofDays(5)).toEpochMilli();
        assertEquals(Duration.ofSeconds(5).toNanos(), pace.waitNanos(dayFive));
        clock.addAndGet(Duration.ofSeconds(6).toNanos());
        assertEquals(0, pace.waitNanos(dayFive));
        assertTrue(pace.waitNanos(Northwater.END.toEpochMilli()) > 0);
    }

    private static MockProducer<byte[], byte[]> producer(boolean autoComplete) {
        return new MockProducer<>(autoComplete, null, new ByteArraySerializer(), new ByteArraySerializer());
    }
}
