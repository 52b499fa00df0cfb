package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.ArrayDeque;
import java.util.List;
import java.util.Map;
import java.util.Objects;
import java.util.Optional;
import java.util.Queue;
import java.util.concurrent.CompletableFuture;
import java.util.concurrent.ExecutionException;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.TimeoutException;
import java.util.concurrent.locks.Condition;
import java.util.concurrent.locks.ReentrantLock;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.errors.InterruptException;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * A topic of one partition that every instance reads from its beginning and may append to, so that all see the same entries in
 * the same order. Small: what is appended is kept for ever.
 *
 * <p>Reading goes on in a thread of its own, which also hands the entries out, one at a time. It starts without a broker,
 * survives outages and says so in {@link #status()}. Thread-safe.
 */
public final class SharedLog implements AutoCloseable {

    /** How often the end of the topic is asked for. */
    static final Duration EVERY = Duration.ofSeconds(1);

    private static final Logger LOG = LoggerFactory.getLogger(SharedLog.class);
    private static final Duration STOP_PATIENCE = Duration.ofSeconds(10);

    private final String topic;
    private final String broker;
    private final SharedLogClients clients;
    private final InstantSource clock;
    private final Reader reader;
    private final OutageLog outages;
    private final Backoff backoff = new Backoff();
    private final Thread thread;

    private final ReentrantLock lock = new ReentrantLock();
    private final Condition called = lock.newCondition();

    /** Guarded by the lock. */
    private final Queue<Request> requests = new ArrayDeque<>();

    /** Guarded by the lock. */
    private boolean stopping;

    private SharedLogSession session;
    private String identity;
    private long position;

    private volatile WorkerState state = WorkerState.STARTING;
    private volatile Instant confirmed;
    private volatile String lastError;

    /** Is given every entry once, in order, in the log's own thread. */
    @FunctionalInterface
    public interface Reader {

        /**
         * Takes one entry.
         *
         * @throws RuntimeException when it cannot be read; the log then stops for good
         */
        void read(Entry entry);
    }

    /** What is written under a key. */
    public record Entry(byte[] key, byte[] value) {}

    private record Request(List<Entry> entries, CompletableFuture<Void> done) {}

    private SharedLog(String topic, String broker, SharedLogClients clients, InstantSource clock, Reader reader) {
        this.topic = Objects.requireNonNull(topic, "topic");
        this.broker = broker;
        this.clients = clients;
        this.clock = Objects.requireNonNull(clock, "clock");
        this.reader = Objects.requireNonNull(reader, "reader");
        outages = new OutageLog(topic, clock);
        thread = new Thread(this::run, topic);
        thread.setDaemon(true);
    }

    /**
     * Starts reading in a thread of its own and returns at once. A topic that is missing is created.
     *
     * @param clientProperties properties of the clients, {@code bootstrap.servers} among them
     */
    public static SharedLog start(
            Map<String, String> clientProperties, String topic, InstantSource clock, Reader reader) {
        return start(
                topic,
                clientProperties.get("bootstrap.servers"),
                new KafkaSharedLogClients(clientProperties, topic),
                clock,
                reader);
    }

    static SharedLog start(String topic, String broker, SharedLogClients clients, InstantSource clock, Reader reader) {
        SharedLog log = new SharedLog(topic, broker, clients, clock, reader);
        log.thread.start();
        return log;
    }

    /** How the log fares, without waiting for it. */
    public SharedLogStatus status() {
        return new SharedLogStatus(state, Optional.ofNullable(confirmed), Optional.ofNullable(lastError));
    }

    /**
     * Appends entries and returns once they, and everything before them, have been read.
     *
     * @throws BrokerException if that does not succeed in time; the entries may have been appended all the same
     */
    public void append(List<Entry> entries, Duration patience) {
        await(new Request(List.copyOf(entries), new CompletableFuture<>()), patience);
    }

    /**
     * Returns once everything that was written before has been read.
     *
     * @throws BrokerException if that does not succeed in time
     */
    public void catchUp(Duration patience) {
        append(List.of(), patience);
    }

    private void await(Request request, Duration patience) {
        lock.lock();
        try {
            if (stopping || state == WorkerState.FAILED) {
                throw new BrokerException("topic " + topic + " is not read any more: " + lastError);
            }
            requests.add(request);
            called.signal();
        } finally {
            lock.unlock();
        }
        try {
            request.done().get(patience.toMillis(), TimeUnit.MILLISECONDS);
        } catch (InterruptedException interrupted) {
            throw new InterruptException(interrupted);
        } catch (TimeoutException | ExecutionException failure) {
            String sentence = failure.getCause() instanceof BrokerException said
                    ? said.getMessage()
                    : Optional.ofNullable(lastError).orElse("the broker does not answer");
            throw new BrokerException(sentence, failure);
        } finally {
            forget(request);
        }
    }

    private void forget(Request request) {
        lock.lock();
        try {
            requests.remove(request);
        } finally {
            lock.unlock();
        }
    }

    /** Stops reading; takes at most about ten seconds. */
    @Override
    public void close() {
        lock.lock();
        try {
            stopping = true;
            called.signal();
        } finally {
            lock.unlock();
        }
        try {
            thread.join(STOP_PATIENCE.toMillis());
        } catch (InterruptedException interrupted) {
            Thread.currentThread().interrupt();
        }
        if (thread.isAlive()) {
            thread.interrupt();
        }
    }

    private void run() {
        try {
            while (!isStopping()) {
                stepOrRecover();
            }
            state = WorkerState.STOPPED;
        } catch (InterruptException interrupted) {
            state = WorkerState.STOPPED;
        } catch (Throwable broken) {
            LOG.error("{}: reading stops for good: {}", topic, broken.getMessage(), broken);
            lastError = broken.getMessage() == null ? broken.toString() : broken.getMessage();
            state = WorkerState.FAILED;
        } finally {
            leave();
            refuseAll("topic " + topic + " is not read any more");
        }
    }

    private void stepOrRecover() {
        Request request = null;
        try {
            if (session == null) {
                session = new SharedLogSession(topic, broker, clients, position, identity);
            }
            request = waitForRequest();
            if (request != null) {
                session.append(request.entries());
            }
            Instant asked = clock.instant();
            session.readToEnd(reader);
            position = session.position();
            identity = session.identity();
            confirmed = asked;
            state = WorkerState.RUNNING;
            backoff.reset();
            outages.over(0);
            if (request != null) {
                request.done().complete(null);
            }
        } catch (InterruptException interrupted) {
            throw interrupted;
        } catch (KafkaException | BrokerException failure) {
            meet(failure);
            if (request != null) {
                request.done().completeExceptionally(new BrokerException(lastError, failure));
            }
            refuseAll(lastError);
            leave();
            pause(backoff.pause());
        } catch (RuntimeException broken) {
            if (request != null) {
                request.done().completeExceptionally(new BrokerException(broken.getMessage(), broken));
            }
            throw broken;
        }
    }

    private void meet(RuntimeException failure) {
        BrokerSentence sentence = BrokerSentence.of(failure, broker);
        lastError = sentence.text();
        outages.met(0, sentence);
        state = confirmed == null ? WorkerState.STARTING : WorkerState.BROKER_UNREACHABLE;
    }

    /** What is asked for next; null once it is time to look at the topic again. */
    private Request waitForRequest() {
        lock.lock();
        try {
            if (requests.isEmpty() && !stopping && confirmed != null) {
                boolean expected = called.await(EVERY.toMillis(), TimeUnit.MILLISECONDS);
                LOG.trace("{}: {}", topic, expected ? "called" : "looking again");
            }
            return requests.poll();
        } catch (InterruptedException interrupted) {
            throw new InterruptException(interrupted);
        } finally {
            lock.unlock();
        }
    }

    private void refuseAll(String sentence) {
        lock.lock();
        try {
            requests.forEach(request -> request.done().completeExceptionally(new BrokerException(sentence)));
            requests.clear();
        } finally {
            lock.unlock();
        }
    }

    private boolean isStopping() {
        lock.lock();
        try {
            return stopping;
        } finally {
            lock.unlock();
        }
    }

    private void pause(Duration pause) {
        long end = System.nanoTime() + pause.toNanos();
        lock.lock();
        try {
            for (long left = pause.toNanos(); left > 0 && !stopping; left = end - System.nanoTime()) {
                left = called.awaitNanos(left);
                refuseWhileDown();
            }
        } catch (InterruptedException interrupted) {
            throw new InterruptException(interrupted);
        } finally {
            lock.unlock();
        }
    }

    private void refuseWhileDown() {
        requests.forEach(request -> request.done().completeExceptionally(new BrokerException(lastError)));
        requests.clear();
    }

    private void leave() {
        SharedLogSession open = session;
        session = null;
        if (open != null) {
            position = open.position();
            open.close();
        }
    }
}
