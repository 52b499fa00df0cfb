package io.tallyward.engine.decide;

import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import io.tallyward.statistics.multiplicity.AdjustedProbability;
import io.tallyward.statistics.split.PearsonSplit;
import io.tallyward.statistics.split.SplitChangePoint;
import io.tallyward.statistics.split.WorstSegment;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;

/**
 * Remembers what it takes to say where a mismatch of the split comes from: units over time, and units by segment. Its size is
 * bounded whatever the length of the run and the number of segments.
 *
 * <p>Variants that are no longer watched are left out altogether: given how many units the others have together, they are
 * split by their planned shares among themselves, before and after.
 */
final class SplitTrace {

    /** Stretches of time of all epochs together, and of one epoch at least. */
    private static final int MOST_STRETCHES = 512;

    private static final int LEAST_STRETCHES = 32;

    private final Plan plan;
    private final long windowMillis;
    private final SplitHistory[] histories;
    private final SegmentUnits[] segments;

    SplitTrace(Plan plan) {
        this.plan = plan;
        windowMillis = plan.count().window().toMillis();
        int epochs = plan.epochCount();
        int planned = plan.epochs().size() + 1;
        int variants = plan.variants().size();
        histories = new SplitHistory[epochs];
        segments = new SegmentUnits[epochs];
        for (int epoch = 0; epoch < epochs; epoch++) {
            Instant start = epoch == 0
                    ? plan.run().from()
                    : plan.allocation().get(epoch - 1).from();
            // What is known of amendments beforehand makes no difference.
            boolean amended = epoch > plan.epochs().size();
            int most = amended ? LEAST_STRETCHES : Math.max(LEAST_STRETCHES, MOST_STRETCHES / planned / 2 * 2);
            histories[epoch] = new SplitHistory(start.toEpochMilli(), windowMillis, variants, most);
            segments[epoch] = new SegmentUnits(variants);
        }
    }

    /** Takes note of a complete window. */
    void observe(long windowStart, List<Cell> cells, List<SegmentCell> bySegment) {
        for (Cell cell : cells) {
            histories[cell.epoch()].add(windowStart, cell.variant(), cell.units());
        }
        for (int epoch = 0; epoch < segments.length && !bySegment.isEmpty(); epoch++) {
            int own = epoch;
            segments[epoch].add(
                    bySegment.stream().filter(cell -> cell.epoch() == own).toList());
        }
    }

    /**
     * Where the mismatch comes from: in the first epoch whose counts alone contradict the plan, or else in the one that
     * contradicts it most.
     *
     * @param watch says which variants are compared, and their planned shares
     * @return empty while there are no units
     */
    Optional<SplitOrigin> origin(SplitWatch watch) {
        double enough = -StrictMath.log(plan.splitCheck().alpha());
        Optional<SplitChangePoint> worst = Optional.empty();
        int found = 0;
        for (int epoch = 0; epoch < histories.length; epoch++) {
            Optional<SplitChangePoint> change =
                    SplitChangePoint.of(watch.shares(epoch), histories[epoch].stretches(watch.watched()));
            double gain = change.map(SplitChangePoint::logLikelihoodGain).orElse(0.0);
            if (change.isPresent() && (worst.isEmpty() || gain > worst.get().logLikelihoodGain())) {
                worst = change;
                found = epoch;
            }
            if (gain >= enough) {
                break;
            }
        }
        int epoch = found;
        return worst.map(change -> origin(watch, epoch, change));
    }

    private SplitOrigin origin(SplitWatch watch, int epoch, SplitChangePoint change) {
        SplitHistory history = histories[epoch];
        List<long[]> stretches = history.stretches(watch.watched());
        long[] since = new long[watch.watched().length];
        stretches.subList(change.window(), stretches.size()).forEach(counts -> add(since, counts, 1));
        return new SplitOrigin(
                epoch,
                Instant.ofEpochMilli(history.startOf(change.window())),
                Instant.ofEpochMilli(history.startOf(change.window() + 1)),
                change.logLikelihoodGain(),
                planned(watch, epoch, since),
                worst(watch, epoch).orElse(null));
    }

    private static void add(long[] sums, long[] counts, int times) {
        for (int i = 0; i < sums.length; i++) {
            sums[i] += times * counts[i];
        }
    }

    private List<PlannedUnits> planned(SplitWatch watch, int epoch, long[] units) {
        return planned(plan, watch, epoch, units);
    }

    /** Units of the variants that are watched, beside their planned shares. */
    static List<PlannedUnits> planned(Plan plan, SplitWatch watch, int epoch, long[] units) {
        double[] shares = watch.shares(epoch);
        List<PlannedUnits> list = new ArrayList<>();
        for (int i = 0; i < units.length; i++) {
            list.add(new PlannedUnits(plan.variants().get(watch.watched()[i]).name(), shares[i], units[i]));
        }
        return list;
    }

    private Optional<SegmentSplit> worst(SplitWatch watch, int epoch) {
        Map<String, long[]> counts = new TreeMap<>();
        Map<String, long[]> totals = new TreeMap<>();
        segments[epoch].byField().forEach((field, values) -> {
            long[] total = totals.computeIfAbsent(field, absent -> new long[watch.watched().length]);
            values.forEach((value, all) -> {
                long[] units = ofWatched(watch, all);
                counts.put(field + SEPARATOR + value, units);
                add(total, units, 1);
            });
        });
        return WorstSegment.of(watch.shares(epoch), counts).map(found -> {
            String field = found.segment().substring(0, found.segment().indexOf(SEPARATOR));
            long[] elsewhere = totals.get(field).clone();
            add(elsewhere, counts.get(found.segment()), -1);
            return segment(watch, epoch, found, counts.get(found.segment()), elsewhere);
        });
    }

    /** No name of a field holds it. */
    private static final String SEPARATOR = "=";

    private static long[] ofWatched(SplitWatch watch, long[] all) {
        long[] units = new long[watch.watched().length];
        for (int i = 0; i < units.length; i++) {
            units[i] = all[watch.watched()[i]];
        }
        return units;
    }

    private SegmentSplit segment(SplitWatch watch, int epoch, WorstSegment found, long[] units, long[] elsewhere) {
        int separator = found.segment().indexOf(SEPARATOR);
        return segment(
                plan,
                found.segment().substring(0, separator),
                found.segment().substring(separator + 1),
                planned(watch, epoch, units),
                planned(watch, epoch, elsewhere),
                found.judged());
    }

    /** What the units of a segment say; of those judged it is the one furthest off, whose p-value is the smallest. */
    static SegmentSplit segment(
            Plan plan, String field, String value, List<PlannedUnits> units, List<PlannedUnits> elsewhere, int judged) {
        double[] shares = units.stream().mapToDouble(PlannedUnits::planned).toArray();
        PearsonSplit split = PearsonSplit.of(shares, units(units));
        double[] all = new double[judged];
        Arrays.fill(all, 1);
        all[0] = split.pValue();
        double adjusted = AdjustedProbability.HOLM.of(all)[0];
        double contrast = Math.min(
                1, judged * PearsonSplit.between(units(units), units(elsewhere)).pValue());
        double alpha = plan.splitCheck().alpha();
        return new SegmentSplit(
                field,
                value,
                units,
                elsewhere,
                split.chiSquare(),
                adjusted,
                contrast,
                judged,
                adjusted <= alpha && contrast <= alpha);
    }

    static long[] units(List<PlannedUnits> variants) {
        return variants.stream().mapToLong(PlannedUnits::units).toArray();
    }

    void write(DataOutput out) throws IOException {
        for (int epoch = 0; epoch < histories.length; epoch++) {
            histories[epoch].write(out);
            segments[epoch].write(out);
        }
    }

    /** @param storedEpochs how many epochs there were when it was written; an amendment may have added some since */
    void read(DataInput in, int storedEpochs) throws IOException {
        for (int epoch = 0; epoch < storedEpochs; epoch++) {
            histories[epoch].read(in);
            segments[epoch].read(in);
        }
    }
}
