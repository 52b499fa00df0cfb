package io.tallyward.demo.story;

import io.tallyward.demo.story.Expectation.ExpectedNotice;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;

/**
 * The prompt to book the way back does harm: 12.5 % instead of 15 % of visitors go on to book.
 *
 * <p>Power: the plan's information is used up at about 16,500 units per variant, where z has mean -6.6; the last boundary
 * is near -2.0, so that a miss has probability Phi(-4.6), about 2 in a million.
 */
public final class ReturnPrompt implements Story {

    @Override
    public String experiment() {
        return "return-prompt";
    }

    @Override
    public List<String> variants() {
        return List.of("silent", "prompt");
    }

    @Override
    public double clickRate(int variant, long atMillis, Device device) {
        return variant == 0 ? 0.150 : 0.125;
    }

    @Override
    public Expectation expectation() {
        return new Expectation(
                "harm: 15.0 % -> 12.5 %",
                Map.of("prompt", Set.of("stop-harm")), 0, "sound", Optional.of(new ExpectedNotice("stop", "prompt")));
    }
}
