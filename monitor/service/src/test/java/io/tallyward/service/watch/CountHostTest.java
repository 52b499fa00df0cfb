package io.tallyward.service.watch;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import ch.qos.logback.classic.Logger;
import ch.qos.logback.classic.spi.ILoggingEvent;
import ch.qos.logback.core.read.ListAppender;
import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.format.EventSlotReader;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.connector.kafka.Output;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.count.CountShard;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.book.PlanSource;
import io.tallyward.service.status.Northwater;
import io.tallyward.service.status.StatusBoard;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Optional;
import org.apache.kafka.clients.consumer.ConsumerRecord;
import org.apache.kafka.common.header.internals.RecordHeaders;
import org.apache.kafka.common.record.TimestampType;
import org.junit.jupiter.api.AfterEach;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;

class CountHostTest {

    private static final int LARGEST = 65_536;
    private static final Instant NOON = Northwater.START.plus(Duration.ofHours(6));
    private static final String VIEW = "{\"kind\":\"view\",\"experiment\":\"quay-banner\",\"variant\":\"wide\","
            + "\"unit\":\"visitor-7\",\"id\":\"e-1\",\"at\":\"" + NOON + "\"}";

    private final Plan plan = Northwater.plan(
            "quay-banner",
            "does the wide quay photo bring more timetable clicks?",
            List.of(new Variant("plain", 0.5, true), new Variant("wide", 0.5, false)),
            List.of());
    private final CountShard shard = new CountShard(
            0,
            1,
            List.of(plan),
            new CountSettings(
                    Duration.ofMinutes(5),
                    Duration.ofMinutes(5),
                    "a key for tests only".getBytes(StandardCharsets.UTF_8)),
            List.of("events"));
    private final EventParser json = EventParser.of(
            new JsonEventReader(EventMapping.DEFAULT, LARGEST),
            new EventSlotReader(EventMapping.DEFAULT, LARGEST, shard.names()));
    private final StatusBoard board = new StatusBoard();
    private final Logger logger = (Logger) org.slf4j.LoggerFactory.getLogger(TrafficLog.class);
    private final ListAppender<ILoggingEvent> heard = new ListAppender<>();
    private long offset;

    @BeforeEach
    void listen() {
        heard.start();
        logger.addAppender(heard);
    }

    @AfterEach
    void stopListening() {
        logger.detachAppender(heard);
    }

    @Test
    void rejectsARecordThatTakesTheParserDown() {
        CountHost host = host(new FailingParser(true));
        host.apply(record(VIEW.getBytes(StandardCharsets.UTF_8)));
        host.apply(record(VIEW.getBytes(StandardCharsets.UTF_8)));
        List<Output> rejects = rejects(host);
        assertEquals(2, rejects.size());
        assertEquals("unparsable", header(rejects.get(0), "tallyward-reason"));
        assertEquals("the parser failed with IllegalStateException", header(rejects.get(0), "tallyward-detail"));
        assertEquals("booking-events-0@0", header(rejects.get(0), "tallyward-origin"));
        assertEquals(2, shard.view().rejected().get(RejectReason.UNPARSABLE));
        assertEquals(2, heard.list.size(), "one line for the reason, one for the parser: " + heard.list);
        assertTrue(
                heard.list.stream().noneMatch(line -> line.getFormattedMessage().contains("visitor-7")));
    }

    @Test
    void countsWhatOnlyTheQuickParserFailsAt() {
        CountHost host = host(new FailingParser(false));
        host.apply(record(VIEW.getBytes(StandardCharsets.UTF_8)));
        assertEquals(List.of(), rejects(host));
        assertEquals(1, shard.view().experiments().get("quay-banner").units());
    }

    @Test
    void keepsOfALargeRecordWhatFits() {
        CountHost host = host(json);
        byte[] large = new byte[5_000_000];
        host.apply(record(large));
        Output reject = rejects(host).get(0);
        assertEquals("oversized", header(reject, "tallyward-reason"));
        assertEquals("5000000", header(reject, "tallyward-full-size"));
        assertEquals(256 * 1024, reject.value().length);
    }

    @Test
    void saysOnceWhatAFloodIsMadeOfAndCountsAllOfIt() {
        CountHost host = host(json);
        byte[] bad = "no event".getBytes(StandardCharsets.UTF_8);
        long most = 0;
        for (int i = 0; i < 100_000; i++) {
            host.apply(record(bad));
            if (host.pendingBytes() > 4_000_000) {
                most = Math.max(most, host.pendingBytes());
                host.drain();
                assertEquals(0, host.pendingBytes());
            }
        }
        assertTrue(most > 4_000_000, "a flood must ask to be written");
        assertEquals(100_000, shard.view().rejected().get(RejectReason.UNPARSABLE));
        assertEquals(1, heard.list.size(), () -> heard.list.toString());
        assertFalse(heard.list.get(0).getFormattedMessage().isEmpty());
    }

    private CountHost host(EventParser parser) {
        return new CountHost(
                shard,
                0,
                1,
                List.of("booking-events"),
                new TopicNames("tallyward"),
                names -> parser,
                PlanSource.fixed(List.of(plan)),
                new TrafficLog("tallyward-rejects"),
                board);
    }

    private ConsumerRecord<byte[], byte[]> record(byte[] value) {
        return new ConsumerRecord<>(
                "booking-events",
                0,
                offset++,
                NOON.toEpochMilli(),
                TimestampType.CREATE_TIME,
                9,
                value.length,
                "visitor-7".getBytes(StandardCharsets.UTF_8),
                value,
                new RecordHeaders(),
                Optional.empty());
    }

    private static List<Output> rejects(CountHost host) {
        return host.drain().stream()
                .filter(output -> output.topic().equals("tallyward-rejects"))
                .toList();
    }

    private static String header(Output output, String name) {
        return new String(output.headers().get(name), StandardCharsets.UTF_8);
    }

    /** Fails at once, or only when it is quick. */
    private final class FailingParser implements EventParser {
        private final boolean always;

        private FailingParser(boolean always) {
            this.always = always;
        }

        @Override
        public boolean read(byte[] value, EventSlot slot) {
            throw new IllegalStateException("cannot cope with visitor-7");
        }

        @Override
        public Decoded read(byte[] value) {
            if (always) {
                throw new IllegalStateException("cannot cope with visitor-7");
            }
            return json.read(value);
        }
    }
}
