package io.tallyward.engine.count;

import io.tallyward.engine.StateLog;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Plan;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Collection;
import java.util.List;
import java.util.Optional;
import java.util.stream.IntStream;

/** Hosts one shard in memory: keeps its log, collects what it tells, and can lose it and start it again. */
final class CountHost {

    static final Duration MAX_SKEW = Duration.ofMinutes(5);
    static final Duration IDLE_AFTER = Duration.ofMinutes(5);

    private final int partition;
    private final int partitions;
    private final Collection<Plan> plans;
    private List<String> sources;
    private final StateLog log = new StateLog();
    private final List<TallyUpdate> tallies = new ArrayList<>();
    private CountShard shard;
    private int restarts;

    CountHost(int partition, int partitions, Collection<Plan> plans, int sources) {
        this.partition = partition;
        this.partitions = partitions;
        this.plans = plans;
        this.sources = IntStream.range(0, sources)
                .mapToObj(source -> "events-" + source)
                .toList();
        shard = fresh();
    }

    static CountHost of(Plan... plans) {
        return new CountHost(0, 1, List.of(plans), 1);
    }

    static CountSettings settings() {
        return new CountSettings(MAX_SKEW, IDLE_AFTER, "a key for tests only".getBytes(StandardCharsets.UTF_8));
    }

    private CountShard fresh() {
        return new CountShard(partition, partitions, plans, settings(), sources);
    }

    /** Feeds events that reached the log the moment they happened. */
    CountHost feed(Event... events) {
        for (Event event : events) {
            feedFrom(0, event);
        }
        return this;
    }

    CountHost feedFrom(int source, Event event) {
        Optional<RejectReason> rejected = shard.apply(source, event.atMillis(), event);
        if (rejected.isPresent()) {
            throw new AssertionError(event + " was rejected: " + rejected.get());
        }
        return this;
    }

    CountShard shard() {
        return shard;
    }

    /** Commits: makes the effects durable. */
    CountHost commit() {
        CountEffects effects = shard.drain();
        log.append(effects.state());
        tallies.addAll(effects.tallies());
        return this;
    }

    /** Ends the input and commits. */
    CountHost end() {
        shard.endOfInput();
        return commit();
    }

    /**
     * Loses the shard and starts it from a log of which the first {@code cleaned} changes have been compacted, every other
     * time after a look at how the log ends.
     */
    CountHost restart(int cleaned) {
        shard = fresh();
        if (++restarts % 2 == 0) {
            log.last(shard.foresight(), shard::foresee);
        }
        log.replayCompacted(cleaned, shard::restore);
        return this;
    }

    /** The same with other input topics from then on. */
    CountHost restartReading(String... topics) {
        sources = List.of(topics);
        return restart(0);
    }

    StateLog log() {
        return log;
    }

    List<TallyUpdate> tallies() {
        return List.copyOf(tallies);
    }

    OutcomeCounts outcomes(String experiment) {
        return shard.view().experiments().get(experiment).outcomes();
    }

    long openEvents(String experiment) {
        return shard.view().experiments().get(experiment).openEvents();
    }

    Counted counted(String experiment) {
        return Counted.of(experiment, tallies);
    }
}
