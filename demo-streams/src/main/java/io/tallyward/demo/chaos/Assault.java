package io.tallyward.demo.chaos;

import io.tallyward.demo.chaos.Recoveries.Strike;
import java.io.IOException;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.TimeUnit;
import org.apache.kafka.common.TopicPartition;

/** Strikes one fault after the other while the stream flows, and waits for the recovery from most of them. */
final class Assault {

    /** The stream flows at a rate at which the events between two faults take so long. */
    private static final double SECONDS_PER_SHARE = 4;

    private static final long POLL_MILLIS = 100;

    /** Frozen for so much longer than the group waits. */
    private static final int LEAST_OVERTIME_SECONDS = 2;

    private static final int OVERTIME_CHOICES = 3;

    private final Fleet fleet;
    private final BrokerProcess broker;
    private final Recoveries recoveries;
    private final Gate gate;
    private final Deadline deadline;
    private final FaultDeck deck;
    private final long share;
    private final List<Strike> strikes = new ArrayList<>();
    private Runnable vigil = () -> {};

    /** Shares the events out over the faults. */
    Assault(Fleet fleet, BrokerProcess broker, Recoveries recoveries, Gate gate, Deadline deadline, Orders orders) {
        this.fleet = fleet;
        this.broker = broker;
        this.recoveries = recoveries;
        this.gate = gate;
        this.deadline = deadline;
        this.deck = new FaultDeck(orders.seed(), orders.brokerSpared());
        this.share = orders.events() / (orders.faults() + 1);
    }

    /**
     * What is to be done.
     *
     * @param faults how many
     * @param events about how many will be sent
     * @param seed of the faults
     * @param brokerSpared whether only instances are struck
     */
    record Orders(int faults, long events, long seed, boolean brokerSpared) {}

    /** The faults so far. */
    List<Strike> strikes() {
        return strikes;
    }

    /**
     * Strikes all faults; the stream is let through to its end after the last.
     *
     * @param eachTime called after every fault
     * @param meanwhile called several times a second; throws when it makes no sense to go on
     */
    void carryOut(int faults, Runnable eachTime, Runnable meanwhile) throws IOException, InterruptedException {
        vigil = meanwhile;
        awaitEvents(share / 2);
        boolean tooSoon = false;
        for (int number = 1; number <= faults; number++) {
            rest(deck.calmMillis(), number);
            strike(tooSoon);
            eachTime.run();
            tooSoon = number < faults && deck.comesTooSoon();
            if (!tooSoon) {
                awaitRecovery(number);
            }
        }
        gate.openTo(Long.MAX_VALUE);
    }

    private void awaitEvents(long count) throws IOException, InterruptedException {
        gate.openTo(count);
        while (gate.passed() < count) {
            pulse(0);
        }
    }

    private void rest(int millis, int faults) throws IOException, InterruptedException {
        long end = System.nanoTime() + TimeUnit.MILLISECONDS.toNanos(millis);
        while (System.nanoTime() < end) {
            pulse(faults);
        }
    }

    private void awaitRecovery(int faults) throws IOException, InterruptedException {
        while (!recoveries.look() || fleet.anyFrozen()) {
            pulse(faults);
        }
    }

    /** Lets a little time pass and as many events through as belong to it, but not those of later faults. */
    private void pulse(int faults) throws IOException, InterruptedException {
        deadline.check();
        vigil.run();
        fleet.replaceFallen();
        broker.requireAlive();
        if (faults > 0) {
            long flow = Math.round(share / SECONDS_PER_SHARE * POLL_MILLIS / 1000.0);
            gate.openTo(Math.min(gate.passed() + flow, share * (faults + 1)));
            recoveries.look();
        }
        TimeUnit.MILLISECONDS.sleep(POLL_MILLIS);
    }

    private void strike(boolean tooSoon) throws IOException, InterruptedException {
        Fault fault = deck.next(fleet.size());
        Optional<Map<TopicPartition, Long>> goals = recoveries.ends();
        List<Instance> awake = fleet.awake();
        if (awake.isEmpty() && fault != Fault.ADD) {
            fault = Fault.ADD;
        }
        Instance victim = awake.isEmpty() ? null : awake.get(deck.choose(awake.size()));
        String whom = fault.concernsBroker() ? "broker" : fault == Fault.ADD ? "-" : victim.name();
        Strike strike = new Strike(fault, whom, tooSoon, deadline.elapsed(), gate.passed());
        strikes.add(strike);
        goals.ifPresent(ends -> recoveries.await(strike, ends));
        carryOut(fault, victim);
    }

    private void carryOut(Fault fault, Instance victim) throws IOException, InterruptedException {
        switch (fault) {
            case KILL -> {
                fleet.kill(victim);
                TimeUnit.MILLISECONDS.sleep(deck.absenceMillis());
                fleet.add();
            }
            case TERM -> {
                fleet.terminate(victim);
                fleet.add();
            }
            case ZOMBIE ->
                victim.freeze(ChaosFiles.SESSION_SECONDS + LEAST_OVERTIME_SECONDS + deck.choose(OVERTIME_CHOICES));
            case ADD -> fleet.add();
            case REMOVE -> fleet.terminate(victim);
            case BROKER_STOP -> {
                broker.stop();
                TimeUnit.MILLISECONDS.sleep(deck.absenceMillis());
                broker.start();
            }
            case BROKER_KILL -> {
                broker.kill();
                TimeUnit.MILLISECONDS.sleep(deck.absenceMillis());
                broker.start();
            }
        }
    }

    /** Waits until nothing is frozen any more and every fault has been recovered from. */
    void awaitCalm() throws IOException, InterruptedException {
        while (!recoveries.look() || fleet.anyFrozen()) {
            pulse(0);
        }
    }

    /** When a run must be over. */
    static final class Deadline {
        private final long beganNanos = System.nanoTime();
        private final Duration most;

        Deadline(Duration most) {
            this.most = most;
        }

        Duration elapsed() {
            return Duration.ofNanos(System.nanoTime() - beganNanos);
        }

        /**
         * Does nothing in time.
         *
         * @throws TimeUp afterwards
         */
        void check() {
            if (elapsed().compareTo(most) > 0) {
                throw new TimeUp(most);
            }
        }
    }

    /** The run has taken longer than it may. */
    static final class TimeUp extends RuntimeException {

        private static final long serialVersionUID = 1L;

        TimeUp(Duration most) {
            super("not done within " + most.toSeconds() + " s");
        }
    }
}
