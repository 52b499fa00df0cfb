package io.tallyward.connector.kafka;

import static org.junit.jupiter.api.Assertions.assertEquals;

import ch.qos.logback.classic.Logger;
import ch.qos.logback.classic.spi.ILoggingEvent;
import ch.qos.logback.core.read.ListAppender;
import io.tallyward.testkit.ManualClock;
import java.time.Duration;
import java.util.List;
import org.junit.jupiter.api.AfterEach;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.slf4j.LoggerFactory;

class OutageLogTest {

    private static final BrokerSentence MISSING = new BrokerSentence("missing", "input topic t does not exist");

    private final ManualClock clock = ManualClock.at("2026-05-04T00:00:00Z");
    private final OutageLog outages = new OutageLog("tallyward-count", clock);
    private final Logger logger = (Logger) LoggerFactory.getLogger(OutageLog.class);
    private final ListAppender<ILoggingEvent> heard = new ListAppender<>();

    @BeforeEach
    void listen() {
        logger.setLevel(ch.qos.logback.classic.Level.INFO);
        heard.start();
        logger.addAppender(heard);
    }

    @AfterEach
    void stopListening() {
        logger.detachAppender(heard);
    }

    @Test
    void saysNothingOfWhatHealsWithinMoments() {
        outages.met(0, MISSING);
        clock.advance(Duration.ofSeconds(2));
        outages.met(0, MISSING);
        outages.over(0);
        assertEquals(List.of(), said());
    }

    @Test
    void saysOnceWhatLastsAndOnceThatItIsOver() {
        clock.advance(Duration.ofSeconds(3));
        outages.met(0, MISSING);
        outages.met(1, MISSING);
        outages.met(0, MISSING);
        outages.over(0);
        outages.over(1);
        assertEquals(
                List.of(
                        "tallyward-count: input topic t does not exist; trying again by itself",
                        "tallyward-count: working again"),
                said());
    }

    @Test
    void repeatsItselfAtGrowingIntervalsThroughoutADay() {
        clock.advance(Duration.ofSeconds(3));
        for (int second = 0; second < 24 * 3600; second += 10) {
            outages.met(second % 2, second % 20 == 0 ? MISSING : new BrokerSentence("other", "no leader"));
            clock.advance(Duration.ofSeconds(10));
        }
        List<String> minutes = said().stream()
                .filter(line -> line.contains("min now"))
                .map(line -> line.replaceAll(".*for (\\d+) min now.*", "$1"))
                .toList();
        assertEquals(List.of("5", "35", "395", "755", "1115"), minutes);
        assertEquals(7, said().size(), "two conditions, each once, and the repetitions");
        outages.over(0);
        outages.over(1);
        outages.met(0, MISSING);
        assertEquals(8, said().size(), "it is over, and a new one has to last before it is said");
    }

    private List<String> said() {
        return heard.list.stream().map(ILoggingEvent::getFormattedMessage).toList();
    }
}
