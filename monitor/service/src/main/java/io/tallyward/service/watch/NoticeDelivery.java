package io.tallyward.service.watch;

import io.tallyward.connector.format.NoticeJson;
import io.tallyward.connector.format.RecordFormatException;
import io.tallyward.connector.kafka.OutboxReader;
import io.tallyward.connector.kafka.OutboxRecord;
import io.tallyward.connector.kafka.OutboxSource;
import io.tallyward.connector.kafka.OutboxStatus;
import io.tallyward.connector.kafka.WorkerState;
import io.tallyward.connector.webhook.AttemptResult;
import io.tallyward.connector.webhook.DeliveryListener;
import io.tallyward.connector.webhook.DeliveryQueue;
import io.tallyward.connector.webhook.DeliveryStatus;
import io.tallyward.connector.webhook.RetrySchedule;
import io.tallyward.connector.webhook.SigningSecret;
import io.tallyward.connector.webhook.WebhookSender;
import io.tallyward.connector.webhook.WebhookTarget;
import io.tallyward.engine.record.Notice;
import io.tallyward.service.config.WebhookConfig;
import io.tallyward.service.status.HealthSource;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import io.tallyward.service.status.WebhookReport;
import java.net.URI;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.time.InstantSource;
import java.util.List;
import java.util.Map;
import java.util.OptionalDouble;
import java.util.concurrent.ConcurrentHashMap;
import java.util.concurrent.atomic.AtomicLong;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Carries notices from the outbox topic to the webhook: at least once, each under its own stable id. A notice leaves the
 * outbox only when it was delivered or visibly given up.
 */
final class NoticeDelivery implements AutoCloseable {

    private static final Logger LOG = LoggerFactory.getLogger(NoticeDelivery.class);

    private static final int CAPACITY = 2 * OutboxSource.USUAL_MOST_PENDING;

    private final WebhookSender sender;
    private final DeliveryQueue queue;
    private final OutboxReader reader;
    private final InstantSource clock;
    private final AtomicLong attempts = new AtomicLong();

    /** What the queue holds, by id of the notice; used by the reader's thread, and left by settled ones on the queue's. */
    private final Map<String, OutboxRecord> held = new ConcurrentHashMap<>();

    private NoticeDelivery(
            WebhookTarget target, TopicNames names, Map<String, String> clientProperties, InstantSource clock) {
        this.clock = clock;
        sender = new WebhookSender(target);
        queue = new DeliveryQueue(
                sender, RetrySchedule.standard(clock.millis()), CAPACITY, clock, new DeliveryListener() {
                    @Override
                    public void attempted(Notice notice, AttemptResult result) {
                        attempts.incrementAndGet();
                    }
                });
        queue.start();
        reader = OutboxReader.start(
                new OutboxSource(
                        names.noticeGroup(), names.notices(), OutboxSource.USUAL_MOST_PENDING, clientProperties),
                clock,
                this::deliver);
    }

    static NoticeDelivery start(
            WebhookConfig webhook,
            TopicNames names,
            Map<String, String> clientProperties,
            URI served,
            InstantSource clock) {
        SigningSecret secret = SigningSecret.parse(new String(webhook.secret().reveal(), StandardCharsets.UTF_8));
        WebhookTarget.Builder target = WebhookTarget.builder(webhook.url(), List.of(secret))
                .allowHttp(webhook.allowHttp())
                .allowPrivate(webhook.allowPrivate())
                .evidenceBase(webhook.pages().map(NoticeDelivery::withSlash).orElse(served));
        webhook.runbook().ifPresent(target::runbookBase);
        return new NoticeDelivery(target.build(), names, clientProperties, clock);
    }

    private static URI withSlash(URI base) {
        return base.toString().endsWith("/") ? base : URI.create(base + "/");
    }

    private void deliver(OutboxRecord record) {
        Notice notice;
        try {
            notice = NoticeJson.read(record.value());
        } catch (RecordFormatException e) {
            LOG.error(
                    "Notice at partition {} offset {} of the outbox cannot be read and is passed over: {}",
                    record.partition(),
                    record.offset(),
                    e.getMessage());
            record.done();
            return;
        }
        if (!queue.hasRoom()) {
            withdrawUnwanted();
        }
        if (!queue.hasRoom()) {
            throw new IllegalStateException("webhook queue: more than " + CAPACITY + " notices are pending");
        }
        held.put(notice.id(), record);
        queue.submit(notice, () -> {
            held.remove(notice.id(), record);
            record.done();
        });
    }

    /** Makes room: what lay in partitions that have moved to another instance is delivered there as well. */
    private void withdrawUnwanted() {
        held.entrySet().removeIf(entry -> {
            boolean unwanted = !entry.getValue().wanted();
            if (unwanted) {
                queue.withdraw(entry.getKey());
            }
            return unwanted;
        });
    }

    HealthSource health() {
        return () -> {
            OutboxStatus status = reader.status();
            State state = state(status.state());
            return new Health(
                    "notices",
                    state,
                    state == State.OK
                            ? delivering(status.pending())
                            : status.lastError().orElse("Joining the group of the outbox."));
        };
    }

    /** A receiver that is away is said, but is no reason to call this instance down: others would fare no better. */
    private String delivering(int pending) {
        String waiting = pending == 1 ? "1 notice waits to be delivered" : pending + " notices wait to be delivered";
        DeliveryStatus deliveries = queue.status();
        if (deliveries.disabled()) {
            return waiting + "; the receiver has asked for nothing more: " + deliveries.lastError() + ".";
        }
        return deliveries.failing()
                ? waiting + "; the last attempt failed: " + deliveries.lastError() + "."
                : waiting + ".";
    }

    private static State state(WorkerState reader) {
        return switch (reader) {
            case RUNNING -> State.OK;
            case STARTING, RESTORING -> State.STARTING;
            case BROKER_UNREACHABLE, STOPPED -> State.DOWN;
            case FAILED -> State.BROKEN;
        };
    }

    WebhookReport report() {
        DeliveryStatus status = queue.status();
        return new WebhookReport(
                attempts.get(),
                status.failedAttempts(),
                status.pending(),
                status.oldestPending()
                        .map(since -> OptionalDouble.of(
                                Duration.between(since, clock.instant()).toMillis() / 1000.0))
                        .orElse(OptionalDouble.empty()),
                status.parkedTotal());
    }

    @Override
    public void close() {
        reader.close();
        queue.close();
        sender.close();
    }
}
