package io.tallyward.connector.webhook;

import io.tallyward.connector.webhook.AttemptResult.Outcome;
import io.tallyward.connector.webhook.DeliveryStatus.Parked;
import io.tallyward.engine.record.Notice;
import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.ArrayDeque;
import java.util.ArrayList;
import java.util.Deque;
import java.util.LinkedHashMap;
import java.util.Map;
import java.util.Objects;
import java.util.Optional;
import java.util.PriorityQueue;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.locks.Condition;
import java.util.concurrent.locks.ReentrantLock;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Delivers notices to one target, each until it is taken or given up, one attempt at a time in the order they fall due: a
 * notice that waits for its next attempt holds up no other. Nothing is kept on disk; the owner of the outbox submits again
 * after a restart what was not settled, under the same id, so that the receiver can tell.
 *
 * <p>Methods may be called from any thread. Attempts, listeners and {@code settled} run on the one sending thread, or, in
 * a queue that was not started, on the thread that calls {@link #runDue}.
 */
public final class DeliveryQueue implements AutoCloseable {

    private static final Logger LOG = LoggerFactory.getLogger(DeliveryQueue.class);

    /** Upper bound of one wait, so that a clock that is set forward is noticed. */
    private static final Duration LONGEST_WAIT = Duration.ofSeconds(30);

    /** How long closing waits for an attempt under way before it interrupts it, and then for the thread to end. */
    private static final long CLOSE_MILLIS = 5_000;

    private final NoticeTransport transport;
    private final RetrySchedule schedule;
    private final int capacity;
    private final InstantSource clock;
    private final DeliveryListener listener;

    private final ReentrantLock lock = new ReentrantLock();
    private final Condition changed = lock.newCondition();

    // All below are guarded by the lock.
    private final Map<String, Delivery> pending = new LinkedHashMap<>();
    private final PriorityQueue<Delivery> waiting = new PriorityQueue<>(Delivery.ORDER);
    private final Deque<Parked> parked = new ArrayDeque<>();
    private Thread thread;
    private long submitted;
    private long delivered;
    private long failedAttempts;
    private long parkedTotal;
    private boolean failing;
    private boolean disabled;
    private boolean closed;
    private String lastError = "";

    /**
     * A queue that sends nothing before {@link #start} or {@link #runDue}.
     *
     * @param transport makes the attempts; closed by its own owner
     * @param schedule when a notice is tried again, and how often
     * @param capacity how many notices may be pending, at least 1
     * @param clock the time
     * @param listener hears what happens
     */
    public DeliveryQueue(
            NoticeTransport transport,
            RetrySchedule schedule,
            int capacity,
            InstantSource clock,
            DeliveryListener listener) {
        if (capacity < 1) {
            throw new IllegalArgumentException("delivery capacity: " + capacity + " (expected: at least 1)");
        }
        this.transport = Objects.requireNonNull(transport, "transport");
        this.schedule = Objects.requireNonNull(schedule, "schedule");
        this.capacity = capacity;
        this.clock = Objects.requireNonNull(clock, "clock");
        this.listener = Objects.requireNonNull(listener, "listener");
    }

    /** Starts the sending thread. */
    public void start() {
        lock.lock();
        try {
            if (thread != null || closed) {
                throw new IllegalStateException("delivery queue: started or closed before (expected: started once)");
            }
            thread = new Thread(this::send, "tallyward-webhook");
            thread.setDaemon(true);
            thread.start();
        } finally {
            lock.unlock();
        }
    }

    /**
     * Takes a notice for delivery. A notice whose id is already pending keeps its place and its attempts; the newer
     * {@code settled} then replaces the older, whose owner has gone.
     *
     * @param settled called once the notice is delivered or parked; never called if it is withdrawn or the queue closed
     * @throws IllegalStateException if there is no room (see {@link #hasRoom}) or the queue is closed
     */
    public void submit(Notice notice, Runnable settled) {
        Objects.requireNonNull(settled, "settled");
        lock.lock();
        try {
            Delivery known = pending.get(notice.id());
            if (known != null) {
                known.settled = settled;
                return;
            }
            if (closed || pending.size() >= capacity) {
                throw new IllegalStateException("delivery queue: " + (closed ? "closed" : "full with " + capacity)
                        + " (expected: open, and hasRoom() asked first)");
            }
            Instant now = clock.instant();
            Instant dueAt = now.plus(schedule.delayBefore(notice.id(), 1));
            Delivery delivery = new Delivery(notice, settled, now, dueAt, submitted++);
            pending.put(notice.id(), delivery);
            waiting.add(delivery);
            changed.signalAll();
        } finally {
            lock.unlock();
        }
    }

    /** Whether one more notice can be submitted. */
    public boolean hasRoom() {
        lock.lock();
        try {
            return !closed && pending.size() < capacity;
        } finally {
            lock.unlock();
        }
    }

    /**
     * Forgets a pending notice, as when another instance takes over its part of the outbox. An attempt under way goes on,
     * but nothing follows from it.
     *
     * @return whether it was pending
     */
    public boolean withdraw(String id) {
        lock.lock();
        try {
            Delivery delivery = pending.remove(id);
            waiting.remove(delivery);
            return delivery != null;
        } finally {
            lock.unlock();
        }
    }

    /** How deliveries stand now. */
    public DeliveryStatus status() {
        lock.lock();
        try {
            Optional<Instant> oldest = pending.values().stream().findFirst().map(delivery -> delivery.submittedAt);
            return new DeliveryStatus(
                    delivered,
                    failedAttempts,
                    pending.size(),
                    oldest,
                    parkedTotal,
                    new ArrayList<>(parked),
                    failing,
                    disabled,
                    lastError);
        } finally {
            lock.unlock();
        }
    }

    /**
     * Makes every attempt that is due by the clock and returns how many that were. For hosts that have a thread and a
     * clock of their own; not for a queue that was started.
     */
    public int runDue() {
        lock.lock();
        try {
            if (thread != null && thread != Thread.currentThread()) {
                throw new IllegalStateException("delivery queue: it has its own thread (expected: not started)");
            }
        } finally {
            lock.unlock();
        }
        int attempts = 0;
        try {
            for (Delivery next = takeDue(); next != null; next = takeDue()) {
                attempts += advance(next) ? 1 : 0;
            }
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
        }
        return attempts;
    }

    /** Lets an attempt under way end, for a few seconds, and stops. Pending notices stay unsettled. */
    @Override
    public void close() {
        Thread sender;
        lock.lock();
        try {
            closed = true;
            sender = thread;
            changed.signalAll();
        } finally {
            lock.unlock();
        }
        if (sender == null || sender == Thread.currentThread()) {
            return;
        }
        try {
            sender.join(CLOSE_MILLIS);
            sender.interrupt();
            sender.join(CLOSE_MILLIS);
        } catch (InterruptedException e) {
            sender.interrupt();
            Thread.currentThread().interrupt();
        }
    }

    private void send() {
        try {
            while (awaitDue()) {
                runDue();
            }
        } catch (InterruptedException e) {
            LOG.debug("The webhook thread was interrupted and ends");
        }
    }

    /** Waits until something is due; false once the queue is closed. */
    private boolean awaitDue() throws InterruptedException {
        lock.lockInterruptibly();
        try {
            while (!closed && !isDue(waiting.peek())) {
                Delivery next = waiting.peek();
                Duration wait = next == null ? LONGEST_WAIT : Duration.between(clock.instant(), next.dueAt);
                long millis = Math.min(wait.toMillis() + 1, LONGEST_WAIT.toMillis());
                if (!changed.await(millis, TimeUnit.MILLISECONDS)) {
                    LOG.trace("Looking again for due notices");
                }
            }
            return !closed;
        } finally {
            lock.unlock();
        }
    }

    private Delivery takeDue() {
        lock.lock();
        try {
            return !closed && isDue(waiting.peek()) ? waiting.poll() : null;
        } finally {
            lock.unlock();
        }
    }

    private boolean isDue(Delivery delivery) {
        // Once the target is disabled there is nothing to wait for: everything is due to be parked.
        return delivery != null && (disabled || !delivery.dueAt.isAfter(clock.instant()));
    }

    /** One step of one notice; returns whether an attempt was made. */
    private boolean advance(Delivery delivery) throws InterruptedException {
        if (status().disabled()) {
            park(delivery, "not sent: the receiver has asked for no more notices");
            return false;
        }
        AttemptResult result = attempt(delivery.notice);
        safely(() -> listener.attempted(delivery.notice, result));
        note(result);
        delivery.attempts++;
        if (result.outcome() == Outcome.DELIVERED) {
            if (remove(delivery)) {
                safely(() -> listener.delivered(delivery.notice));
                safely(delivery.settled);
            }
        } else if (result.outcome() == Outcome.GONE || delivery.attempts >= schedule.attempts()) {
            park(delivery, result.detail());
        } else {
            retry(delivery, result);
        }
        return true;
    }

    private AttemptResult attempt(Notice notice) throws InterruptedException {
        try {
            return transport.attempt(notice, clock.instant());
        } catch (RuntimeException e) {
            LOG.error("Notice {} could not be attempted; it stays in the queue and is tried again", notice.id(), e);
            return AttemptResult.unanswered(
                    "the attempt itself failed: " + e.getClass().getSimpleName());
        }
    }

    private void note(AttemptResult result) {
        boolean failed = result.outcome() != Outcome.DELIVERED;
        boolean wasFailing;
        int waitingNow;
        lock.lock();
        try {
            wasFailing = failing;
            waitingNow = pending.size();
            failing = failed;
            delivered += failed ? 0 : 1;
            failedAttempts += failed ? 1 : 0;
            lastError = failed ? result.detail() : lastError;
            disabled |= result.outcome() == Outcome.GONE;
        } finally {
            lock.unlock();
        }
        if (result.outcome() == Outcome.GONE) {
            LOG.error("Webhook disabled: {}. Notices are parked until the service is restarted", result.detail());
        } else if (failed && !wasFailing) {
            LOG.warn("Webhook failing: {}. Notices are kept and tried again; {} pending", result.detail(), waitingNow);
        } else if (!failed && wasFailing) {
            LOG.info("Webhook recovered: a notice was delivered; {} still pending", Math.max(0, waitingNow - 1));
        }
    }

    private void retry(Delivery delivery, AttemptResult result) {
        Duration wait = schedule.delayBefore(delivery.notice.id(), delivery.attempts + 1);
        Duration asked = result.retryAfter().orElse(Duration.ZERO);
        lock.lock();
        try {
            if (pending.get(delivery.notice.id()) == delivery) {
                delivery.dueAt = clock.instant().plus(asked.compareTo(wait) > 0 ? asked : wait);
                waiting.add(delivery);
            }
        } finally {
            lock.unlock();
        }
    }

    private void park(Delivery delivery, String error) {
        if (!remove(delivery)) {
            return;
        }
        Notice notice = delivery.notice;
        lock.lock();
        try {
            parkedTotal++;
            parked.addLast(new Parked(notice.id(), notice.kind(), notice.experiment(), error));
            if (parked.size() > DeliveryStatus.MAX_PARKED) {
                parked.removeFirst();
            }
        } finally {
            lock.unlock();
        }
        LOG.error(
                "Notice {} ({} of {}) is given up: {}",
                notice.id(),
                notice.kind().code(),
                notice.experiment(),
                error);
        safely(() -> listener.parked(notice, error));
        safely(delivery.settled);
    }

    /** Ends a delivery; false if it was withdrawn meanwhile. */
    private boolean remove(Delivery delivery) {
        lock.lock();
        try {
            return pending.remove(delivery.notice.id(), delivery);
        } finally {
            lock.unlock();
        }
    }

    private static void safely(Runnable foreign) {
        try {
            foreign.run();
        } catch (RuntimeException e) {
            LOG.error("A listener of webhook deliveries failed; deliveries go on", e);
        }
    }
}
