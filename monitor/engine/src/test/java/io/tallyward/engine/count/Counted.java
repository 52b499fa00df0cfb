package io.tallyward.engine.count;

import io.tallyward.engine.Plans;
import java.util.Collection;
import java.util.Map;
import java.util.TreeMap;

/**
 * The counts of one experiment, merged over partitions and commits.
 *
 * @param cells trials and successes of every window, epoch and variant that has any trials
 * @param segments units by segment, as {@code field=value}, and place
 */
record Counted(Map<Place, Count> cells, Map<String, Map<Place, Long>> segments) {

    /**
     * Where a count belongs.
     *
     * @param minute start of its window, minutes from the start of the run
     */
    record Place(long minute, int epoch, int variant) implements Comparable<Place> {

        static Place of(long windowStart, int epoch, int variant) {
            return new Place((windowStart - Plans.FROM.toEpochMilli()) / 60_000, epoch, variant);
        }

        @Override
        public int compareTo(Place other) {
            int byMinute = Long.compare(minute, other.minute);
            int byEpoch = byMinute != 0 ? byMinute : Integer.compare(epoch, other.epoch);
            return byEpoch != 0 ? byEpoch : Integer.compare(variant, other.variant);
        }
    }

    /** Trials and successes. */
    record Count(long trials, long successes) {

        Count plus(Count other) {
            return new Count(trials + other.trials, successes + other.successes);
        }
    }

    Counted {
        cells = new TreeMap<>(cells);
        segments = new TreeMap<>(segments);
    }

    /** Counts of a plan without segments. */
    Counted(Map<Place, Count> cells) {
        this(cells, Map.of());
    }

    static Counted of(String experiment, Collection<TallyUpdate> updates) {
        Map<Place, Count> cells = new TreeMap<>();
        Map<String, Map<Place, Long>> segments = new TreeMap<>();
        for (TallyUpdate update : updates) {
            if (update.experiment().equals(experiment)) {
                update.windows().forEach(window -> add(cells, window));
                update.windows().forEach(window -> addSegments(segments, window));
            }
        }
        return new Counted(cells, segments);
    }

    private static void add(Map<Place, Count> cells, WindowTally window) {
        for (WindowTally.Cell cell : window.cells()) {
            cells.merge(
                    Place.of(window.startMillis(), cell.epoch(), cell.variant()),
                    new Count(cell.trials(), cell.successes()),
                    Count::plus);
        }
    }

    private static void addSegments(Map<String, Map<Place, Long>> segments, WindowTally window) {
        for (WindowTally.SegmentCell cell : window.segments()) {
            segments.computeIfAbsent(cell.field() + "=" + cell.value(), segment -> new TreeMap<>())
                    .merge(Place.of(window.startMillis(), cell.epoch(), cell.variant()), cell.units(), Long::sum);
        }
    }

    /** Counts over all windows and epochs of one variant. */
    Count total(int variant) {
        return cells.entrySet().stream()
                .filter(cell -> cell.getKey().variant() == variant)
                .map(Map.Entry::getValue)
                .reduce(new Count(0, 0), Count::plus);
    }
}
