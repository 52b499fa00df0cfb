package io.tallyward.demo.story;

/** The default scenario, told once for all tests of a run. */
public final class ToldScenario {

    private static final Scenario DEFAULT = Scenario.of(Scenario.DEFAULT_SEED);

    private ToldScenario() {}

    public static Scenario withDefaultSeed() {
        return DEFAULT;
    }
}
