package io.tallyward.demo.story;

import java.time.Duration;
import java.util.SplittableRandom;

/** The plain course of a visit: a view, perhaps a click, and what comes after. */
final class Plot {

    private static final Duration LATEST_CLICK = Duration.ofMinutes(29);
    private static final double MEAN_CLICK_MINUTES = 4;
    private static final double CLICKS_AGAIN = 0.3;
    private static final double CLICKS_TOO_LATE = 0.02;
    private static final double COMES_BACK = 0.58;

    private Plot() {}

    static void plain(UnitScript script) {
        opening(script, Delivery.USUAL);
        answer(script, Delivery.USUAL);
        aftermath(script);
    }

    /** The first view. */
    static void opening(UnitScript script, Delivery delivery) {
        script.view(script.variant(), script.at(), delivery);
    }

    /** A click in time, if the visitor is persuaded; perhaps more of them. A few others click when it no longer counts. */
    static void answer(UnitScript script, Delivery delivery) {
        SplittableRandom random = script.random();
        if (script.persuaded()) {
            long click = script.at() + clickDelayMillis(random);
            script.click(script.variant(), click, delivery);
            while (random.nextDouble() < CLICKS_AGAIN) {
                click += between(script, Duration.ofSeconds(2), Duration.ofMinutes(40));
                script.click(script.variant(), click, delivery);
            }
        } else if (random.nextDouble() < CLICKS_TOO_LATE) {
            long delay = between(script, Northwater.ATTRIBUTION.plusMinutes(1), Duration.ofHours(12));
            script.click(script.variant(), script.at() + delay, delivery);
        }
    }

    /** Further views of the same variant, half of them soon, the others within three days. */
    static void aftermath(UnitScript script) {
        while (script.random().nextDouble() < COMES_BACK) {
            Duration within = script.random().nextBoolean() ? Duration.ofMinutes(40) : Duration.ofDays(3);
            script.view(
                    script.variant(), script.at() + between(script, Duration.ofSeconds(10), within), Delivery.USUAL);
        }
    }

    /** A span in milliseconds, uniform between two durations. */
    static long between(UnitScript script, Duration least, Duration most) {
        return script.random().nextLong(least.toMillis(), most.toMillis());
    }

    private static long clickDelayMillis(SplittableRandom random) {
        double minutes = -MEAN_CLICK_MINUTES * Math.log(1 - random.nextDouble());
        return 1_000 + Math.round(minutes * 60_000) % (LATEST_CLICK.toMillis() - 1_000);
    }
}
