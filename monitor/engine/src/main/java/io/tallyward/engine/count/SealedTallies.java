package io.tallyward.engine.count;

import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/** Collects what was sealed since the last commit into as few updates as the causes of sealing and a size bound allow. */
final class SealedTallies {

    /** Windows per update: keeps an update of ten variants and two epochs well below a broker's usual limit of 1 MB. */
    private static final int WINDOWS_PER_UPDATE = 400;

    private final int partition;
    private final int partitions;
    private final Map<String, Pending> pending = new LinkedHashMap<>();
    private final List<TallyUpdate> closed = new ArrayList<>();

    SealedTallies(int partition, int partitions) {
        this.partition = partition;
        this.partitions = partitions;
    }

    private static final class Pending {
        private final SealCause cause;
        private final List<WindowTally> windows = new ArrayList<>();
        private long sealedUntil;

        private Pending(SealCause cause) {
            this.cause = cause;
        }
    }

    void add(ExperimentCounter counter, SealCause cause, List<ExperimentCounter.Sealed> windows) {
        String experiment = counter.plan().experiment();
        Pending current = pending.get(experiment);
        if (current != null && current.cause != cause) {
            close(counter, current);
            current = null;
        }
        if (current == null) {
            current = new Pending(cause);
            pending.put(experiment, current);
        }
        long windowMillis = counter.plan().count().window().toMillis();
        for (ExperimentCounter.Sealed window : windows) {
            if (current.windows.size() == WINDOWS_PER_UPDATE) {
                close(counter, current);
                current.windows.clear();
            }
            current.windows.add(window.tally());
            current.sealedUntil = window.tally().startMillis() + windowMillis;
        }
        current.sealedUntil = counter.sealedUntil();
    }

    private void close(ExperimentCounter counter, Pending update) {
        closed.add(update(counter.plan().experiment(), counter.planDigest(), update));
    }

    private TallyUpdate update(String experiment, String planDigest, Pending update) {
        return new TallyUpdate(
                experiment, planDigest, partition, partitions, update.sealedUntil, update.cause, update.windows);
    }

    List<TallyUpdate> take(Map<String, ExperimentCounter> counters) {
        pending.forEach((experiment, update) ->
                closed.add(update(experiment, counters.get(experiment).planDigest(), update)));
        pending.clear();
        List<TallyUpdate> result = new ArrayList<>(closed);
        closed.clear();
        return result;
    }
}
