package io.tallyward.connector.kafka;

import io.tallyward.engine.shard.RefusedStateException;
import java.time.Duration;
import java.time.InstantSource;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.TimeUnit;
import org.apache.kafka.common.KafkaException;
import org.apache.kafka.common.errors.InterruptException;
import org.apache.kafka.common.errors.WakeupException;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/** One thread's life: step its session, survive what heals, end on what does not, and stop in order when told to. */
final class ShardWorker implements Runnable {

    private static final Logger LOG = LoggerFactory.getLogger(ShardWorker.class);

    /** How often a waiting member shows the group that it is still there. */
    private static final Duration PRESENCE = Duration.ofMillis(200);

    private final ShardGroup group;
    private final int number;
    private final Clients clients;
    private final InstantSource clock;
    private final RunnerListener listener;
    private final OutageLog outages;
    private final StatusBoard board;
    private final Backoff backoff = new Backoff();
    private final CountDownLatch stop = new CountDownLatch(1);

    /** Written by the worker's thread; read by {@link #stop()} for waking it up. */
    private volatile ShardSession session;

    private long settledCycles;
    private boolean inOutage;

    ShardWorker(RunnerSetting setting, int number, Clients clients) {
        this.group = setting.group();
        this.clock = setting.clock();
        this.listener = setting.listener();
        this.outages = setting.outages();
        this.number = number;
        this.clients = clients;
        this.board = new StatusBoard(number);
    }

    WorkerStatus status() {
        return board.published();
    }

    /** Asks the worker to commit, leave and end; returns at once. */
    void stop() {
        stop.countDown();
        ShardSession open = session;
        if (open != null) {
            open.wakeup();
        }
    }

    @Override
    public void run() {
        try {
            while (!stopping()) {
                stepOrRecover();
            }
            finish();
            board.state(WorkerState.STOPPED);
        } catch (InterruptException interrupted) {
            abandon();
            board.state(WorkerState.STOPPED);
        } catch (Throwable broken) {
            fail(broken);
        }
    }

    private void stepOrRecover() {
        try {
            if (session == null) {
                session = new ShardSession(group, clients, clock, this::stopping, board);
                settledCycles = 0;
            }
            session.step();
            settle();
        } catch (WakeupException stopRequested) {
            LOG.debug("{}: worker {} woken up", group.id(), number);
        } catch (InterruptException interrupted) {
            throw interrupted;
        } catch (KafkaException | BrokerException failure) {
            recoverUnlessStopping(failure);
        }
    }

    private void recoverUnlessStopping(RuntimeException failure) {
        try {
            recover(failure);
        } catch (WakeupException stopRequested) {
            LOG.debug("{}: worker {} woken up while waiting", group.id(), number);
        }
    }

    private void settle() {
        if (session.trouble().isPresent()) {
            meet(session.trouble().get());
        } else if (session.cycles() > settledCycles) {
            settledCycles = session.cycles();
            backoff.reset();
            inOutage = false;
            outages.over(number);
        }
        if (!inOutage) {
            board.state(session.state());
        }
    }

    private void meet(RuntimeException failure) {
        BrokerSentence sentence = BrokerSentence.of(failure, group.broker());
        inOutage = true;
        outages.met(number, sentence);
        board.error(sentence.text());
        board.state(BrokerSentence.takenOver(failure) ? WorkerState.RESTORING : WorkerState.BROKER_UNREACHABLE);
    }

    private void recover(RuntimeException failure) {
        LOG.debug("{}: worker {} starts over", group.id(), number, failure);
        meet(failure);
        if (session != null) {
            if (session.mustBeAbandoned()) {
                abandon();
            } else {
                session.forget();
            }
        }
        pause(backoff.pause());
    }

    /** Waits, but not so that the group would think the member dead. */
    private void pause(Duration pause) {
        long end = System.nanoTime() + pause.toNanos();
        for (long left = pause.toNanos(); left > 0 && !stopping(); left = end - System.nanoTime()) {
            try {
                if (stop.await(Math.min(left, PRESENCE.toNanos()), TimeUnit.NANOSECONDS)) {
                    return;
                }
            } catch (InterruptedException interrupted) {
                throw new InterruptException(interrupted);
            }
            showPresence();
        }
    }

    private void showPresence() {
        if (session == null) {
            return;
        }
        try {
            session.keepMembership();
        } catch (WakeupException | InterruptException stopRequested) {
            throw stopRequested;
        } catch (KafkaException | BrokerException failure) {
            meet(failure);
            abandon();
        }
    }

    private void finish() {
        if (session != null) {
            session.finish();
            session = null;
        }
    }

    private void abandon() {
        ShardSession open = session;
        session = null;
        if (open != null) {
            open.abandon();
        }
    }

    private void fail(Throwable broken) {
        Throwable root = root(broken);
        if (root instanceof RefusedStateException) {
            LOG.error("{}: stops for good, nothing was committed: {}", group.id(), root.getMessage());
        } else {
            LOG.error(
                    "{}: worker {} stops for good, nothing of its last step was committed", group.id(), number, broken);
        }
        try {
            abandon();
        } catch (RuntimeException alsoBroken) {
            broken.addSuppressed(alsoBroken);
        }
        Throwable telling = root instanceof RefusedStateException ? root : broken;
        board.error(telling.getMessage() == null ? telling.toString() : telling.getMessage());
        board.state(WorkerState.FAILED);
        listener.onFatal(group.id(), broken);
    }

    private static Throwable root(Throwable failure) {
        Throwable root = failure;
        while (root.getCause() != null) {
            root = root.getCause();
        }
        return root;
    }

    private boolean stopping() {
        return stop.getCount() == 0;
    }
}
