package io.tallyward.connector.kafka;

import java.time.Duration;
import java.time.InstantSource;
import java.util.ArrayList;
import java.util.List;
import java.util.function.IntFunction;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Hosts the shards of one group in this process: some worker threads, each with its own consumer, its own transactional
 * producer and the shards of the partitions it has been given. More processes with the same group share the partitions.
 *
 * <p>A runner starts whether or not a broker is there, never ends because of one, and says how it fares in
 * {@link #status()}. Thread-safe.
 */
public final class ShardRunner implements AutoCloseable {

    private static final Logger LOG = LoggerFactory.getLogger(ShardRunner.class);

    /** How long {@link #close()} waits for the last commits before it interrupts the workers. */
    private static final Duration STOP_PATIENCE = Duration.ofSeconds(10);

    /** Without a partition there is nothing to commit; only a question to an absent broker may be under way. */
    private static final Duration NOTHING_TO_COMMIT_PATIENCE = Duration.ofSeconds(1);

    private static final Duration INTERRUPT_PATIENCE = Duration.ofSeconds(2);

    private final ShardGroup group;
    private final List<ShardWorker> workers = new ArrayList<>();
    private final List<Thread> threads = new ArrayList<>();

    private ShardRunner(RunnerSetting setting, IntFunction<Clients> clients) {
        this.group = setting.group();
        for (int number = 0; number < group.workers(); number++) {
            ShardWorker worker = new ShardWorker(setting, number, clients.apply(number));
            workers.add(worker);
            Thread thread = new Thread(worker, group.id() + "-" + number);
            thread.setDaemon(true);
            threads.add(thread);
        }
    }

    /**
     * Starts the workers and returns at once.
     *
     * @param clock the wall clock that shards are told and commit intervals are measured by
     * @param listener hears about broken invariants
     */
    public static ShardRunner start(ShardGroup group, InstantSource clock, RunnerListener listener) {
        return start(group, clock, listener, worker -> new KafkaClients(group, worker));
    }

    static ShardRunner start(
            ShardGroup group, InstantSource clock, RunnerListener listener, IntFunction<Clients> clients) {
        ShardRunner runner =
                new ShardRunner(new RunnerSetting(group, clock, listener, new OutageLog(group.id(), clock)), clients);
        runner.threads.forEach(Thread::start);
        return runner;
    }

    /** How every worker fares, without waiting for any of them. */
    public RunnerStatus status() {
        return new RunnerStatus(
                group.id(), workers.stream().map(ShardWorker::status).toList());
    }

    /**
     * Commits what is done, leaves the group and ends the workers; takes at most about twelve seconds. What could not be
     * committed in that time is repeated by whoever takes over.
     */
    @Override
    public void close() {
        boolean hosting = !status().partitions().isEmpty();
        workers.forEach(ShardWorker::stop);
        if (!ended(hosting ? STOP_PATIENCE : NOTHING_TO_COMMIT_PATIENCE)) {
            if (hosting) {
                sayUncommitted();
            }
            threads.forEach(Thread::interrupt);
            ended(INTERRUPT_PATIENCE);
        }
    }

    private void sayUncommitted() {
        LOG.warn(
                "{}: the broker at {} did not take the last commit within {} s: what was not committed is repeated"
                        + " at the next start",
                group.id(),
                group.broker(),
                STOP_PATIENCE.toSeconds());
    }

    private boolean ended(Duration patience) {
        long end = System.nanoTime() + patience.toNanos();
        try {
            for (Thread thread : threads) {
                thread.join(
                        Math.max(1, Duration.ofNanos(end - System.nanoTime()).toMillis()));
            }
        } catch (InterruptedException interrupted) {
            Thread.currentThread().interrupt();
        }
        return threads.stream().noneMatch(Thread::isAlive);
    }
}
