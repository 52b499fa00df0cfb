package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import ch.qos.logback.classic.Logger;
import ch.qos.logback.classic.spi.ILoggingEvent;
import ch.qos.logback.core.read.ListAppender;
import io.tallyward.connector.webhook.Fixtures.ManualClock;
import io.tallyward.engine.record.Notice;
import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.TimeUnit;
import org.junit.jupiter.api.Test;
import org.slf4j.LoggerFactory;

class DeliveryQueueTest {

    private static final RetrySchedule EXACT =
            new RetrySchedule(RetrySchedule.standard(0).delays(), 0, 0);
    private static final AttemptResult OK = AttemptResult.delivered(200);
    private static final AttemptResult DOWN = AttemptResult.refused(500, Optional.empty());

    private final ManualClock clock = new ManualClock(Fixtures.START);
    private final Map<String, AttemptResult> answers = new HashMap<>();
    private final List<String> attempted = new ArrayList<>();
    private final List<String> settled = new ArrayList<>();
    private final List<String> heard = new ArrayList<>();
    private final DeliveryQueue queue = new DeliveryQueue(this::answer, EXACT, 200, clock, new Listener());

    @Test
    void deliversAtOnceAndSettlesOnce() {
        submit("n_1");
        assertEquals(1, queue.runDue());
        assertEquals(0, queue.runDue());
        assertEquals(List.of("n_1"), settled);
        assertEquals(List.of("attempted n_1 delivered", "delivered n_1"), heard);
        DeliveryStatus status = queue.status();
        assertEquals(1, status.delivered());
        assertEquals(0, status.pending());
        assertEquals(Optional.empty(), status.oldestPending());
    }

    @Test
    void triesTenTimesOverThreeDaysAndThenParks() {
        answers.put("n_1", DOWN);
        submit("n_1");
        List<Duration> waits = new ArrayList<>();
        Instant last = clock.instant();
        for (Duration day = Duration.ZERO; day.toDays() < 5; day = day.plusSeconds(5)) {
            if (queue.runDue() > 0) {
                waits.add(Duration.between(last, clock.instant()));
                last = clock.instant();
            }
            clock.advance(Duration.ofSeconds(5));
        }
        assertEquals(EXACT.delays(), waits);
        assertEquals(List.of("n_1"), settled);
        DeliveryStatus status = queue.status();
        assertEquals(10, status.failedAttempts());
        assertEquals(1, status.parkedTotal());
        assertEquals(
                List.of(new DeliveryStatus.Parked("n_1", Notice.Kind.STOP, "quay-banner", "the receiver answered 500")),
                status.parked());
        assertTrue(status.failing());
        assertEquals("parked n_1: the receiver answered 500", heard.get(heard.size() - 1));
    }

    @Test
    void letsNoNoticeWaitForAnother() {
        answers.put("n_1", DOWN);
        submit("n_1");
        submit("n_2");
        queue.runDue();
        assertEquals(List.of("n_1", "n_2"), attempted);
        submit("n_3");
        queue.runDue();
        assertEquals(List.of("n_2", "n_3"), settled);
        answers.put("n_1", OK);
        clock.advance(Duration.ofMillis(4_999));
        assertEquals(0, queue.runDue());
        clock.advance(Duration.ofMillis(1));
        assertEquals(1, queue.runDue());
        assertEquals(List.of("n_2", "n_3", "n_1"), settled);
        assertFalse(queue.status().failing());
    }

    @Test
    void waitsAsLongAsTheReceiverAsksButNeverLessThanTheSchedule() {
        answers.put("n_1", AttemptResult.refused(429, Optional.of(Duration.ofMinutes(1))));
        submit("n_1");
        queue.runDue();
        clock.advance(Duration.ofSeconds(59));
        assertEquals(0, queue.runDue());
        clock.advance(Duration.ofSeconds(1));
        assertEquals(1, queue.runDue());
        clock.advance(Duration.ofMinutes(4));
        assertEquals(0, queue.runDue());
        clock.advance(Duration.ofMinutes(1));
        assertEquals(1, queue.runDue());
    }

    @Test
    void parksEverythingOnceTheReceiverIsGone() {
        answers.put("n_1", DOWN);
        submit("n_1");
        queue.runDue();
        answers.put("n_2", AttemptResult.gone(410));
        submit("n_2");
        submit("n_3");
        assertEquals(1, queue.runDue());
        submit("n_4");
        assertEquals(0, queue.runDue());
        assertEquals(List.of("n_1", "n_2"), attempted);
        assertEquals(
                List.of("n_2", "n_1", "n_3", "n_4").stream().sorted().toList(),
                settled.stream().sorted().toList());
        DeliveryStatus status = queue.status();
        assertTrue(status.disabled());
        assertEquals(0, status.pending());
        assertEquals(4, status.parkedTotal());
    }

    @Test
    void keepsThePlaceOfANoticeSubmittedAgain() {
        answers.put("n_1", DOWN);
        queue.submit(Fixtures.stop("n_1"), () -> settled.add("the older owner"));
        queue.runDue();
        submit("n_1");
        assertEquals(0, queue.runDue());
        assertEquals(1, queue.status().pending());
        answers.put("n_1", OK);
        clock.advance(Duration.ofSeconds(5));
        assertEquals(1, queue.runDue());
        assertEquals(List.of("n_1"), settled);
    }

    @Test
    void forgetsAWithdrawnNotice() {
        answers.put("n_1", DOWN);
        submit("n_1");
        queue.runDue();
        assertTrue(queue.withdraw("n_1"));
        assertFalse(queue.withdraw("n_1"));
        clock.advance(Duration.ofDays(1));
        assertEquals(0, queue.runDue());
        assertEquals(List.of(), settled);
        assertEquals(0, queue.status().pending());
    }

    @Test
    void settlesNothingForANoticeWithdrawnDuringItsAttempt() {
        List<DeliveryQueue> itself = new ArrayList<>();
        NoticeTransport withdrawing = (notice, now) -> {
            itself.get(0).withdraw(notice.id());
            return notice.id().equals("n_1") ? OK : DOWN;
        };
        DeliveryQueue raced = new DeliveryQueue(withdrawing, EXACT, 10, clock, DeliveryListener.NONE);
        itself.add(raced);
        raced.submit(Fixtures.stop("n_1"), () -> settled.add("n_1"));
        raced.submit(Fixtures.stop("n_2"), () -> settled.add("n_2"));
        assertEquals(2, raced.runDue());
        assertEquals(List.of(), settled);
        assertEquals(0, raced.status().pending());
    }

    @Test
    void refusesMoreThanItHasRoomFor() {
        answers.put("n_0", DOWN);
        DeliveryQueue small = new DeliveryQueue(this::answer, EXACT, 1, clock, DeliveryListener.NONE);
        assertTrue(small.hasRoom());
        small.submit(Fixtures.stop("n_0"), () -> {});
        assertFalse(small.hasRoom());
        small.submit(Fixtures.stop("n_0"), () -> {});
        assertThrows(IllegalStateException.class, () -> small.submit(Fixtures.stop("n_1"), () -> {}));
    }

    @Test
    void boundsTheListOfParkedNoticesButCountsThemAll() {
        DeliveryQueue once = new DeliveryQueue(
                (notice, now) -> DOWN,
                new RetrySchedule(List.of(Duration.ZERO), 0, 0),
                200,
                clock,
                DeliveryListener.NONE);
        for (int i = 0; i < 150; i++) {
            once.submit(Fixtures.stop("n_" + i), () -> {});
        }
        once.runDue();
        assertEquals(150, once.status().parkedTotal());
        assertEquals(100, once.status().parked().size());
        assertEquals("n_149", once.status().parked().get(99).id());
    }

    @Test
    void survivesWhatForeignCodeThrows() {
        NoticeTransport broken = (notice, now) -> {
            throw new IllegalStateException("broken");
        };
        DeliveryListener worse = new DeliveryListener() {
            @Override
            public void attempted(Notice notice, AttemptResult result) {
                throw new IllegalStateException("worse");
            }
        };
        DeliveryQueue hurt = new DeliveryQueue(broken, EXACT, 10, clock, worse);
        hurt.submit(Fixtures.stop("n_1"), () -> {});
        assertEquals(1, hurt.runDue());
        assertEquals(
                "the attempt itself failed: IllegalStateException",
                hurt.status().lastError());
        assertEquals(1, hurt.status().pending());
    }

    @Test
    void logsWhenTheTargetStartsFailingAndWhenItRecoversAndNothingBetween() {
        Logger logger = (Logger) LoggerFactory.getLogger(DeliveryQueue.class);
        ListAppender<ILoggingEvent> log = new ListAppender<>();
        log.start();
        logger.addAppender(log);
        answers.put("n_1", DOWN);
        submit("n_1");
        for (int second = 0; second < 3_600; second++) {
            queue.runDue();
            clock.advance(Duration.ofSeconds(1));
        }
        answers.put("n_1", OK);
        clock.advance(Duration.ofDays(1));
        queue.runDue();
        submit("n_2");
        queue.runDue();
        logger.detachAppender(log);
        assertEquals(
                List.of(
                        "WARN Webhook failing: the receiver answered 500. Notices are kept and tried again; 1 pending",
                        "INFO Webhook recovered: a notice was delivered; 0 still pending"),
                log.list.stream()
                        .map(line -> line.getLevel() + " " + line.getFormattedMessage())
                        .toList());
    }

    @Test
    void showsTheAgeOfTheOldestPendingNotice() {
        answers.put("n_1", DOWN);
        answers.put("n_2", DOWN);
        submit("n_1");
        clock.advance(Duration.ofHours(1));
        submit("n_2");
        queue.runDue();
        assertEquals(Optional.of(Fixtures.START), queue.status().oldestPending());
        assertEquals(2, queue.status().pending());
    }

    @Test
    void sendsOnItsOwnThreadOnceStarted() throws InterruptedException {
        CountDownLatch done = new CountDownLatch(2);
        List<String> threads = new ArrayList<>();
        NoticeTransport transport = (notice, now) -> {
            threads.add(Thread.currentThread().getName());
            return threads.size() == 1 ? DOWN : OK;
        };
        RetrySchedule quick = EXACT.scaled(0.001);
        DeliveryQueue started = new DeliveryQueue(transport, quick, 10, InstantSource.system(), DeliveryListener.NONE);
        try (started) {
            started.start();
            assertThrows(IllegalStateException.class, started::runDue);
            assertThrows(IllegalStateException.class, started::start);
            started.submit(Fixtures.stop("n_1"), done::countDown);
            started.submit(Fixtures.stop("n_2"), done::countDown);
            assertTrue(done.await(20, TimeUnit.SECONDS));
        }
        assertEquals(List.of("tallyward-webhook", "tallyward-webhook", "tallyward-webhook"), threads);
        assertFalse(started.hasRoom());
        assertThrows(IllegalStateException.class, () -> started.submit(Fixtures.stop("n_3"), () -> {}));
    }

    private void submit(String id) {
        queue.submit(Fixtures.stop(id), () -> settled.add(id));
    }

    private AttemptResult answer(Notice notice, Instant now) {
        assertEquals(clock.instant(), now);
        attempted.add(notice.id());
        return answers.getOrDefault(notice.id(), OK);
    }

    private final class Listener implements DeliveryListener {

        @Override
        public void attempted(Notice notice, AttemptResult result) {
            heard.add("attempted " + notice.id() + " " + result.outcome().code());
        }

        @Override
        public void delivered(Notice notice) {
            heard.add("delivered " + notice.id());
        }

        @Override
        public void parked(Notice notice, String lastError) {
            heard.add("parked " + notice.id() + ": " + lastError);
        }
    }
}
