package io.tallyward.demo.story;

import io.tallyward.demo.story.UnitScript.Visit;
import java.time.Duration;
import java.util.SplittableRandom;
import java.util.function.Consumer;

/** Tells one story: draws its visits and writes the events of each. */
final class Teller {

    /** Twists keep a day's distance from both ends of the fourteen days, so that even late events are delivered. */
    private static final long TWISTS_FROM =
            Northwater.START.plus(Duration.ofDays(1)).toEpochMilli();

    private static final long TWISTS_UNTIL =
            Northwater.END.minus(Duration.ofDays(1)).toEpochMilli();

    /** Share of visits moved to the first or the last millisecond of their window. */
    private static final double ON_WINDOW_EDGE = 0.0005;

    /** Share of the first day's visitors of whom a view from before the run turns up. */
    private static final double SEEN_BEFORE_RUN = 0.01;

    /** Units that are first seen after the fourteen days; about five a minute. */
    static final int LAST_VISITORS = 900;

    private static final int BOT_VIEWS = 3_000;
    private static final int BOT_CLICKS = 600;

    private final Story story;
    private final Roster roster;
    private final Ids ids;
    private final SplittableRandom random;
    private final Consumer<StreamEvent> out;
    private final Rhythm rhythm = new Rhythm();

    Teller(Story story, Roster roster, Ids ids, SplittableRandom random, Consumer<StreamEvent> out) {
        this.story = story;
        this.roster = roster;
        this.ids = ids;
        this.random = random;
        this.out = out;
    }

    void tell() {
        for (int i = 0; i < story.units(); i++) {
            tellUnit(roster.unit(i), rhythm.draw(random));
        }
        if (outlastsStream()) {
            for (int i = 0; i < LAST_VISITORS; i++) {
                tellLastVisitor(roster.unit(story.units() + i));
            }
        }
    }

    /** Whether visitors come even after the fourteen days. */
    boolean outlastsStream() {
        return story.runsAt(Northwater.STREAM_END.toEpochMilli());
    }

    /** A program that fetches the page thousands of times in two days under one unit: one trial, however busy it is. */
    void tellBot(String unit) {
        long from = Northwater.START.plus(Duration.ofDays(3)).toEpochMilli();
        UnitScript script = new UnitScript(story, new Visit(unit, Device.WEB, 1, from), ids, random, out);
        script.view(1, from, Delivery.PROMPT);
        long span = Duration.ofDays(2).toMillis();
        for (int i = 0; i < BOT_VIEWS; i++) {
            script.view(1, from + 1 + random.nextLong(span), Delivery.PROMPT);
        }
        for (int i = 0; i < BOT_CLICKS; i++) {
            script.click(1, from + 1 + random.nextLong(span), Delivery.PROMPT);
        }
    }

    /** Tells of a unit that is first seen at about this moment. */
    void tellUnit(String unit, long aboutMillis) {
        long at = aboutMillis;
        if (random.nextDouble() < ON_WINDOW_EDGE) {
            at = Northwater.windowStart(at) + (random.nextBoolean() ? 0 : Northwater.WINDOW.toMillis() - 1);
        }
        UnitScript script = script(unit, at);
        Twist twist = at >= TWISTS_FROM && at < TWISTS_UNTIL ? Twist.draw(random) : null;
        if (twist != null) {
            twist.write(script);
            return;
        }
        Plot.plain(script);
        if (at < TWISTS_FROM && random.nextDouble() < SEEN_BEFORE_RUN) {
            script.viewBeforeRun(Plot.between(script, Duration.ofMinutes(1), Duration.ofHours(6)));
        }
    }

    /** Tells of a unit that comes after the fourteen days and looks once. */
    void tellLastVisitor(String unit) {
        long end = Northwater.END.toEpochMilli();
        long at = end + random.nextLong(Northwater.STREAM_END.toEpochMilli() - end - Delivery.PROMPT.mostMillis());
        script(unit, at).lastView();
    }

    private UnitScript script(String unit, long at) {
        Device device = Device.draw(random);
        int variant = drawVariant(story.shares(story.epochAt(at)));
        return new UnitScript(story, new Visit(unit, device, variant, at), ids, random, out);
    }

    private int drawVariant(double[] shares) {
        double point = random.nextDouble();
        int variant = 0;
        while (variant < shares.length - 1 && point >= shares[variant]) {
            point -= shares[variant];
            variant++;
        }
        return variant;
    }
}
