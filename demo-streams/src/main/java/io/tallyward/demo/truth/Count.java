package io.tallyward.demo.truth;

/**
 * What was counted in a place.
 *
 * @param trials units first exposed there
 * @param successes those of them that clicked in time
 */
public record Count(long trials, long successes) {

    public static final Count NONE = new Count(0, 0);

    public Count plus(Count other) {
        return new Count(trials + other.trials, successes + other.successes);
    }
}
