package io.tallyward.demo.truth;

/**
 * What was counted in a place. Where every unit is one trial, all further numbers follow from the first two.
 *
 * @param trials units first exposed there, or views
 * @param successes those of them with a click in time
 * @param units units first exposed there
 * @param trialSquares by how much the sum over units of trials squared grew
 * @param products by how much the sum over units of trials times successes grew
 * @param successSquares by how much the sum over units of successes squared grew
 */
public record Count(long trials, long successes, long units, long trialSquares, long products, long successSquares) {

    public static final Count NONE = new Count(0, 0);

    /** Units of which each is one trial. */
    public Count(long trials, long successes) {
        this(trials, successes, trials, trials, successes, successes);
    }

    /**
     * What one unit adds.
     *
     * @param trialsBefore its trials before
     * @param successesBefore its successes before
     * @param trials its further trials
     * @param successes its further successes
     */
    static Count ofUnit(long trialsBefore, long successesBefore, long trials, long successes) {
        long allTrials = trialsBefore + trials;
        long allSuccesses = successesBefore + successes;
        return new Count(
                trials,
                successes,
                trialsBefore == 0 ? 1 : 0,
                allTrials * allTrials - trialsBefore * trialsBefore,
                allTrials * allSuccesses - trialsBefore * successesBefore,
                allSuccesses * allSuccesses - successesBefore * successesBefore);
    }

    public Count plus(Count other) {
        return new Count(
                trials + other.trials,
                successes + other.successes,
                units + other.units,
                trialSquares + other.trialSquares,
                products + other.products,
                successSquares + other.successSquares);
    }

    /** Trials and successes alone. */
    public Count plain() {
        return new Count(trials, successes);
    }
}
