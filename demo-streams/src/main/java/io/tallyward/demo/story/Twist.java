package io.tallyward.demo.story;

import java.time.Duration;
import java.util.SplittableRandom;

/**
 * A disturbance in a unit's events. Each constant says what it does and what ought to become of the events; its share is
 * the proportion of units that have it. Together they stay far below the two per cent of crossovers and of late events at
 * which a monitor loses its trust.
 */
enum Twist {
    /** A view under another variant, within two days of the first; sometimes a click too. Both are crossovers. */
    CROSSOVER(0.004) {
        @Override
        void write(UnitScript script) {
            Plot.plain(script);
            int other = script.otherVariant();
            long at = script.at() + Plot.between(script, Duration.ofMinutes(1), Duration.ofDays(2));
            script.view(other, at, Delivery.USUAL);
            if (script.random().nextDouble() < 0.3) {
                script.click(other, at + Plot.between(script, Duration.ofSeconds(5), Duration.ofMinutes(10)), PROMPT);
            }
        }
    },
    /** The first view arrives after the second and after a click: the trial, with its click, moves to the first. */
    FIRST_VIEW_OVERTAKEN(0.003) {
        @Override
        void write(UnitScript script) {
            script.view(script.variant(), script.at(), Delivery.SLOW);
            long second = script.at() + Plot.between(script, Duration.ofMinutes(1), Duration.ofMinutes(4));
            script.view(script.variant(), second, PROMPT);
            if (script.persuaded()) {
                script.click(script.variant(), second + Plot.between(script, SECOND, Duration.ofMinutes(1)), PROMPT);
            }
            Plot.aftermath(script);
        }
    },
    /** The same with another variant in the first view: the trial moves to that variant, the second is a crossover. */
    FIRST_VARIANT_OVERTAKEN(0.0003) {
        @Override
        void write(UnitScript script) {
            script.view(script.otherVariant(), script.at(), Delivery.SLOW);
            long second = script.at() + Plot.between(script, Duration.ofMinutes(1), Duration.ofMinutes(4));
            script.view(script.variant(), second, PROMPT);
        }
    },
    /** Two views at the same millisecond under two variants: the one with the lesser id is the trial. */
    TIE(0.0003) {
        @Override
        void write(UnitScript script) {
            script.view(script.variant(), script.at(), PROMPT);
            script.view(script.otherVariant(), script.at(), PROMPT);
        }
    },
    /** The click arrives minutes before its view, and counts all the same. */
    CLICK_OVERTAKES_VIEW(0.005) {
        @Override
        void write(UnitScript script) {
            script.view(script.variant(), script.at(), Delivery.SLOW);
            if (script.persuaded()) {
                script.click(script.variant(), script.at() + Plot.between(script, SECOND, MINUTES_3), PROMPT);
            }
            Plot.aftermath(script);
        }
    },
    /** The only view arrives hours late and is no trial; a click that came in time is an orphan. */
    LATE_VIEW(0.002) {
        @Override
        void write(UnitScript script) {
            script.view(script.variant(), script.at(), Delivery.LATE);
            if (script.random().nextDouble() < 0.3) {
                script.click(script.variant(), script.at() + Plot.between(script, SECOND, MINUTES_20), PROMPT);
            }
        }
    },
    /** A click in time arrives hours late: late for a trial without a success, a repeat for one with. */
    LATE_CLICK(0.002) {
        @Override
        void write(UnitScript script) {
            Plot.opening(script, PROMPT);
            Plot.answer(script, PROMPT);
            script.click(script.variant(), script.at() + Plot.between(script, SECOND, MINUTES_20), Delivery.LATE);
        }
    },
    /** A view from before the first one arrives hours late and moves nothing. */
    LATE_EARLIER_VIEW(0.001) {
        @Override
        void write(UnitScript script) {
            Plot.plain(script);
            long earlier = script.at() - Plot.between(script, Duration.ofMinutes(6), Duration.ofMinutes(40));
            script.view(script.variant(), earlier, Delivery.LATE);
        }
    },
    /** A click of a unit that was never seen to view anything: an orphan. */
    NO_VIEW(0.002) {
        @Override
        void write(UnitScript script) {
            script.click(script.variant(), script.at(), Delivery.USUAL);
        }
    },
    /** A click from before the first view: an orphan, whatever happens later. */
    CLICK_TOO_EARLY(0.001) {
        @Override
        void write(UnitScript script) {
            script.click(script.variant(), script.at() - Plot.between(script, SECOND, MINUTES_20), Delivery.USUAL);
            Plot.plain(script);
        }
    },
    /** A click exactly at the end of the attribution time: a success, for the interval is closed. */
    CLICK_JUST_IN_TIME(0.0003) {
        @Override
        void write(UnitScript script) {
            Plot.opening(script, PROMPT);
            script.click(script.variant(), script.at() + Northwater.ATTRIBUTION.toMillis(), PROMPT);
        }
    },
    /** A click one millisecond after that: expired. */
    CLICK_JUST_EXPIRED(0.0003) {
        @Override
        void write(UnitScript script) {
            Plot.opening(script, PROMPT);
            script.click(script.variant(), script.at() + Northwater.ATTRIBUTION.toMillis() + 1, PROMPT);
        }
    },
    /** Everything bears the time of a clock that is up to ninety seconds ahead, which is tolerated. */
    FAST_CLOCK(0.005) {
        @Override
        void write(UnitScript script) {
            Plot.opening(script, Delivery.FAST_CLOCK);
            Plot.answer(script, Delivery.FAST_CLOCK);
        }
    },
    /** A further view bears a time hours, or more than a year, ahead of its arrival: rejected, and time stands still. */
    BAD_CLOCK(0.001) {
        @Override
        void write(UnitScript script) {
            Plot.plain(script);
            Duration ahead = script.random().nextInt(4) == 0 ? Duration.ofDays(400) : Duration.ofHours(9);
            long received = script.at() + Plot.between(script, Duration.ofMinutes(1), Duration.ofHours(1));
            script.viewByBadClock(received, Plot.between(script, Northwater.MAX_SKEW.multipliedBy(2), ahead));
        }
    };

    private static final Delivery PROMPT = Delivery.PROMPT;
    private static final Duration SECOND = Duration.ofSeconds(1);
    private static final Duration MINUTES_3 = Duration.ofMinutes(3);
    private static final Duration MINUTES_20 = Duration.ofMinutes(20);

    private final double share;

    Twist(double share) {
        this.share = share;
    }

    /** Writes a unit's events with the disturbance in them. */
    abstract void write(UnitScript script);

    /** A twist for a unit, or null for the plain course of events. */
    static Twist draw(SplittableRandom random) {
        double point = random.nextDouble();
        for (Twist twist : values()) {
            point -= twist.share;
            if (point < 0) {
                return twist;
            }
        }
        return null;
    }
}
