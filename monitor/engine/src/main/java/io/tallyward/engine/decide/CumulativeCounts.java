package io.tallyward.engine.decide;

import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.UnitTotals;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.ratio.RatioStratum;
import io.tallyward.statistics.ratio.UnitSums;
import java.io.DataInput;
import java.io.DataOutput;
import java.io.IOException;
import java.math.BigInteger;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;
import java.util.function.ToLongFunction;
import java.util.stream.IntStream;

/**
 * Trials and successes of the complete windows, by allocation epoch and variant; with the sums over units where a plan counts
 * views.
 */
final class CumulativeCounts {

    private final Plan plan;
    private final boolean byView;
    private final Cell[][] cells;

    CumulativeCounts(Plan plan) {
        this.plan = plan;
        byView = plan.count().by() == CountBy.VIEW;
        cells = new Cell[plan.epochCount()][plan.variants().size()];
        for (int epoch = 0; epoch < cells.length; epoch++) {
            for (int variant = 0; variant < cells[epoch].length; variant++) {
                cells[epoch][variant] = Cell.ofUnits(epoch, variant, 0, 0);
            }
        }
    }

    /**
     * The counts that a record carries.
     *
     * @throws IllegalArgumentException if the plan has no such epoch or variant, or the numbers cannot be counts
     */
    static CumulativeCounts of(Plan plan, List<VariantCount> recorded) {
        CumulativeCounts counts = new CumulativeCounts(plan);
        for (VariantCount count : recorded) {
            int variant = plan.variantIndex(count.variant());
            if (!(count.epoch() >= 0 && count.epoch() < counts.epochs() && variant >= 0)) {
                throw new IllegalArgumentException("counts: epoch " + count.epoch() + ", variant " + count.variant()
                        + " (expected: one of the " + counts.epochs() + " epochs and of the variants of the plan)");
            }
            counts.add(cell(count, variant));
        }
        return counts;
    }

    private static Cell cell(VariantCount count, int variant) {
        UnitTotals totals = count.unitTotals();
        return totals == null
                ? Cell.ofUnits(count.epoch(), variant, count.trials(), count.successes())
                : new Cell(
                        count.epoch(),
                        variant,
                        totals.units(),
                        count.trials(),
                        count.successes(),
                        totals.trialSquares(),
                        totals.products(),
                        totals.successSquares());
    }

    /** Whether nothing is counted. */
    boolean none() {
        return !IntStream.range(0, cells.length).anyMatch(this::anyTrials);
    }

    /** Whether every number is at least that of earlier counts, which may have fewer epochs. */
    boolean includes(CumulativeCounts earlier) {
        for (int epoch = 0; epoch < earlier.cells.length; epoch++) {
            for (int variant = 0; variant < cells[epoch].length; variant++) {
                Cell now = cells[epoch][variant];
                Cell then = earlier.cells[epoch][variant];
                boolean grown = now.trials() >= then.trials()
                        && now.successes() >= then.successes()
                        && now.units() >= then.units()
                        && now.trialSquares() >= then.trialSquares()
                        && now.products() >= then.products()
                        && now.successSquares() >= then.successSquares();
                if (!grown) {
                    return false;
                }
            }
        }
        return true;
    }

    void add(Cell cell) {
        cells[cell.epoch()][cell.variant()] = cells[cell.epoch()][cell.variant()].plus(cell);
    }

    int epochs() {
        return cells.length;
    }

    /** Units of each variant during an epoch, in the plan's order: what was allocated, whatever a trial is. */
    long[] unitsIn(int epoch) {
        long[] units = new long[cells[epoch].length];
        for (int variant = 0; variant < units.length; variant++) {
            units[variant] = cells[epoch][variant].units();
        }
        return units;
    }

    long trials(int variant) {
        return sum(variant, Cell::trials);
    }

    long successes(int variant) {
        return sum(variant, Cell::successes);
    }

    /**
     * How many units with equally many trials each would weigh as much as those of a variant do: {@code (sum x)^2 / sum x^2}
     * (Kish 1965, recalled). No unit has more than one over its root of all trials. Where every unit is one trial it is their
     * number.
     */
    double effectiveUnits(int variant) {
        double trials = trials(variant);
        double squares = sum(variant, Cell::trialSquares);
        return squares > 0 ? trials * (trials / squares) : 0;
    }

    private long sum(int variant, ToLongFunction<Cell> number) {
        long sum = 0;
        for (Cell[] epoch : cells) {
            sum = Math.addExact(sum, number.applyAsLong(epoch[variant]));
        }
        return sum;
    }

    /** The comparison of a variant with the control, one stratum per epoch; empty while there is no information. */
    Optional<Evidence> evidence(int variant) {
        int control = plan.variantIndex(plan.control().name());
        if (byView) {
            List<RatioStratum> strata = new ArrayList<>();
            for (Cell[] epoch : cells) {
                strata.add(new RatioStratum(sums(epoch[variant]), sums(epoch[control])));
            }
            return Evidence.Views.of(strata);
        }
        List<Stratum> strata = new ArrayList<>();
        for (Cell[] epoch : cells) {
            strata.add(new Stratum(
                    epoch[variant].successes(),
                    epoch[variant].trials(),
                    epoch[control].successes(),
                    epoch[control].trials()));
        }
        return Evidence.Trials.of(strata);
    }

    private static UnitSums sums(Cell cell) {
        return new UnitSums(
                cell.units(),
                BigInteger.valueOf(cell.trials()),
                BigInteger.valueOf(cell.successes()),
                BigInteger.valueOf(cell.trialSquares()),
                BigInteger.valueOf(cell.products()),
                BigInteger.valueOf(cell.successSquares()));
    }

    /** All counts, by epoch then variant; epochs that have not begun are left out. */
    List<VariantCount> list() {
        List<VariantCount> list = new ArrayList<>();
        for (int epoch = 0; epoch < cells.length; epoch++) {
            if (epoch == 0 || anyTrials(epoch)) {
                for (Cell cell : cells[epoch]) {
                    list.add(new VariantCount(
                            epoch,
                            plan.variants().get(cell.variant()).name(),
                            cell.trials(),
                            cell.successes(),
                            byView ? totals(cell) : null));
                }
            }
        }
        return list;
    }

    private static UnitTotals totals(Cell cell) {
        return new UnitTotals(cell.units(), cell.trialSquares(), cell.products(), cell.successSquares());
    }

    private boolean anyTrials(int epoch) {
        for (Cell cell : cells[epoch]) {
            if (cell.trials() > 0) {
                return true;
            }
        }
        return false;
    }

    void write(DataOutput out) throws IOException {
        for (Cell[] epoch : cells) {
            for (Cell cell : epoch) {
                out.writeLong(cell.trials());
                out.writeLong(cell.successes());
                if (byView) {
                    out.writeLong(cell.units());
                    out.writeLong(cell.trialSquares());
                    out.writeLong(cell.products());
                    out.writeLong(cell.successSquares());
                }
            }
        }
    }

    /** @param storedEpochs how many epochs there were when it was written; an amendment may have added some since */
    void read(DataInput in, int storedEpochs) throws IOException {
        for (int epoch = 0; epoch < storedEpochs; epoch++) {
            for (int variant = 0; variant < cells[epoch].length; variant++) {
                long trials = in.readLong();
                long successes = in.readLong();
                cells[epoch][variant] = byView
                        ? new Cell(
                                epoch,
                                variant,
                                in.readLong(),
                                trials,
                                successes,
                                in.readLong(),
                                in.readLong(),
                                in.readLong())
                        : Cell.ofUnits(epoch, variant, trials, successes);
            }
        }
    }
}
