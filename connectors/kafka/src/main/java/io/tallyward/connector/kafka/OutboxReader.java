package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.InstantSource;
import java.util.Objects;
import java.util.Optional;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.TimeUnit;
import org.apache.kafka.clients.consumer.Consumer;
import org.apache.kafka.clients.consumer.KafkaConsumer;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.WakeupException;
import org.apache.kafka.common.serialization.ByteArrayDeserializer;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Reads committed notices and hands them out for delivery, each at least once. How far the group has come is committed only
 * up to the lowest notice that is not done, so that a restart hands out again whatever was under way; that is safe because
 * a notice has a stable id. One notice that takes days therefore holds back the commit, not the delivery of others, until
 * the limit of pending notices is reached and reading pauses.
 *
 * <p>Like a runner it starts without a broker, survives outages and says so in {@link #status()}. Thread-safe.
 */
public final class OutboxReader implements AutoCloseable {

    private static final Logger LOG = LoggerFactory.getLogger(OutboxReader.class);
    private static final Duration STOP_PATIENCE = Duration.ofSeconds(10);

    private final OutboxSource source;
    private final OutboxClients clients;
    private final InstantSource clock;
    private final Delivery delivery;
    private final OutboxLedger ledger = new OutboxLedger();
    private final OutageLog outages;
    private final Backoff backoff = new Backoff();
    private final CountDownLatch stop = new CountDownLatch(1);
    private final Thread thread;

    private volatile OutboxSession session;
    private volatile WorkerState state = WorkerState.STARTING;
    private volatile String lastError;

    private OutboxReader(OutboxSource source, OutboxClients clients, InstantSource clock, Delivery delivery) {
        this.source = source;
        this.clients = clients;
        this.clock = Objects.requireNonNull(clock, "clock");
        this.delivery = Objects.requireNonNull(delivery, "delivery");
        this.outages = new OutageLog(source.group(), clock);
        this.thread = new Thread(this::run, source.group());
        thread.setDaemon(true);
    }

    /** Starts reading in a thread of its own and returns at once. */
    public static OutboxReader start(OutboxSource source, InstantSource clock, Delivery delivery) {
        return start(source, new KafkaOutboxClients(source), clock, delivery);
    }

    static OutboxReader start(OutboxSource source, OutboxClients clients, InstantSource clock, Delivery delivery) {
        OutboxReader reader = new OutboxReader(source, clients, clock, delivery);
        reader.thread.start();
        return reader;
    }

    /** How the reader fares, without waiting for it. */
    public OutboxStatus status() {
        return new OutboxStatus(
                state, ledger.count(), ledger.oldest(), ledger.delivered(), Optional.ofNullable(lastError));
    }

    /** Commits what is done and leaves the group; takes at most about ten seconds. */
    @Override
    public void close() {
        stop.countDown();
        OutboxSession open = session;
        if (open != null) {
            open.wakeup();
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
            while (stop.getCount() > 0) {
                stepOrRecover();
            }
            leave();
            state = WorkerState.STOPPED;
        } catch (InterruptException interrupted) {
            leave();
            state = WorkerState.STOPPED;
        } catch (Throwable broken) {
            LOG.error("{}: reading notices stops for good", source.group(), broken);
            lastError = broken.toString();
            state = WorkerState.FAILED;
            leave();
        }
    }

    private void stepOrRecover() {
        try {
            if (session == null) {
                session = new OutboxSession(source, clients, ledger, delivery, clock);
            }
            session.step();
            settle();
        } catch (WakeupException stopRequested) {
            LOG.debug("{}: woken up", source.group());
        } catch (InterruptException interrupted) {
            throw interrupted;
        } catch (KafkaException | BrokerException failure) {
            meet(failure);
            leave();
            pause(backoff.pause());
        }
    }

    private void settle() {
        if (session.trouble().isPresent()) {
            meet(session.trouble().get());
            return;
        }
        backoff.reset();
        outages.over(0);
        state = session.joined() ? WorkerState.RUNNING : WorkerState.STARTING;
    }

    private void meet(RuntimeException failure) {
        BrokerSentence sentence = BrokerSentence.of(failure, source.broker());
        lastError = sentence.text();
        outages.met(0, sentence);
        state = WorkerState.BROKER_UNREACHABLE;
    }

    private void leave() {
        OutboxSession open = session;
        session = null;
        if (open != null) {
            open.close();
        }
    }

    private void pause(Duration pause) {
        try {
            if (stop.await(pause.toMillis(), TimeUnit.MILLISECONDS)) {
                LOG.debug("{}: stopped while waiting", source.group());
            }
        } catch (InterruptedException interrupted) {
            throw new InterruptException(interrupted);
        }
    }

    /** The real clients. */
    private record KafkaOutboxClients(OutboxSource source) implements OutboxClients {

        @Override
        public Cluster cluster() {
            return ClientSettings.cluster(source.clientProperties());
        }

        @Override
        public Consumer<byte[], byte[]> notices() {
            return new KafkaConsumer<>(
                    ClientSettings.outbox(source.clientProperties(), source.group(), source.mostPerPoll()),
                    new ByteArrayDeserializer(),
                    new ByteArrayDeserializer());
        }
    }
}
