package io.tallyward.demo.story;

import java.time.Duration;
import java.util.SplittableRandom;

/** When visitors come: every day alike, few at night, most in the evening. */
final class Rhythm {

    /** Relative traffic of the hours of a day, UTC; the quietest hour has a third of the mean. */
    private static final double[] HOURS = {
        4, 3, 3, 3, 3, 4, 6, 8, 9, 10, 10, 11, 12, 11, 10, 10, 10, 11, 13, 14, 14, 12, 8, 6
    };

    private static final long HOUR_MILLIS = Duration.ofHours(1).toMillis();

    private final double[] cumulative = new double[HOURS.length];

    Rhythm() {
        double sum = 0;
        for (int hour = 0; hour < HOURS.length; hour++) {
            sum += HOURS[hour];
            cumulative[hour] = sum;
        }
    }

    /** Share of a day's visitors who come in one of its hours, 0 to 23. */
    static double share(int hour) {
        double sum = 0;
        for (double weight : HOURS) {
            sum += weight;
        }
        return HOURS[hour] / sum;
    }

    /** A moment of the fourteen days, in milliseconds since the epoch. */
    long draw(SplittableRandom random) {
        long days = Duration.between(Northwater.START, Northwater.END).toDays();
        double point = random.nextDouble() * cumulative[HOURS.length - 1];
        int hour = 0;
        while (cumulative[hour] <= point) {
            hour++;
        }
        return Northwater.START.toEpochMilli()
                + random.nextLong(days) * Duration.ofDays(1).toMillis()
                + hour * HOUR_MILLIS
                + random.nextLong(HOUR_MILLIS);
    }
}
