package io.tallyward.service.rehearse;

import java.util.Optional;

/**
 * Count, mean and sum of squared deviations of a stream of numbers, and of two streams put together (Chan, Golub and
 * LeVeque, "Algorithms for computing the sample variance", The American Statistician 37 (1983) 242-247, recalled). Same
 * numbers and same order of merging, same bits. Not thread-safe.
 */
final class Moments {

    private long count;
    private double mean;
    private double squares;

    void add(double value) {
        count++;
        double before = value - mean;
        mean += before / count;
        squares += before * (value - mean);
    }

    void add(Moments later) {
        if (later.count == 0) {
            return;
        }
        double both = (double) count + later.count;
        double apart = later.mean - mean;
        squares += later.squares + apart * apart * (count * (later.count / both));
        mean += apart * (later.count / both);
        count += later.count;
    }

    /** Empty without a number. */
    Optional<Mean> mean() {
        if (count == 0) {
            return Optional.empty();
        }
        double variance = count > 1 ? squares / (count - 1) : 0;
        return Optional.of(new Mean(mean, StrictMath.sqrt(variance / count), count));
    }
}
