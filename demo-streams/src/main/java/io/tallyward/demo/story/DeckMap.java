package io.tallyward.demo.story;

import io.tallyward.demo.story.Expectation.ExpectedNotice;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;

/**
 * Three ways to choose a place on deck: the tilted map is better than the list (15.5 % against 13 %), the seating chart is
 * slightly worse (12.4 %), which the one-sided test of its plan cannot and need not find.
 *
 * <p>Power: each comparison has half of the family's level of 0.05. The information is used up at about 17,700 units per
 * variant, where z of the tilted map has mean 6.7 against a last boundary near 2.1: a miss has probability Phi(-4.6), about
 * 2 in a million. The chart is declared a benefit with probability below Phi(-1.65 - 1.7), about 4 in ten thousand, even
 * with the level that the settled comparison passes on.
 *
 * <p>The run of this experiment outlasts the stream, so that its traffic carries event time past the end of the others.
 */
public final class DeckMap implements Story {

    private static final double[] RATES = {0.130, 0.124, 0.155};

    @Override
    public String experiment() {
        return "deck-map";
    }

    @Override
    public List<String> variants() {
        return List.of("list", "chart", "tilt");
    }

    @Override
    public Instant runEnd() {
        return Northwater.START.plus(Duration.ofDays(21));
    }

    @Override
    public int units() {
        return 60_000;
    }

    @Override
    public double[] shares(int epoch) {
        return new double[] {0.34, 0.33, 0.33};
    }

    @Override
    public double clickRate(int variant, long atMillis, Device device) {
        return RATES[variant];
    }

    @Override
    public Expectation expectation() {
        return new Expectation(
                "tilt: 13.0 % -> 15.5 %",
                Map.of("tilt", Set.of("stop-benefit"), "chart", Expectation.NO_STOP),
                0,
                "sound",
                Optional.of(new ExpectedNotice("stop", "tilt")));
    }
}
