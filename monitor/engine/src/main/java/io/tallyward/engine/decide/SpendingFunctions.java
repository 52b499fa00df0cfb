package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Tail;
import io.tallyward.statistics.spending.SpendingFunction;

/** From the spending a plan names to its function. */
public final class SpendingFunctions {

    private SpendingFunctions() {}

    /** The function a plan names. */
    public static SpendingFunction of(Spending spending) {
        return switch (spending.family()) {
            case OBRIEN_FLEMING -> SpendingFunction.obrienFlemingType();
            case POCOCK -> SpendingFunction.pocockType();
            case HWANG_SHIH_DECANI -> SpendingFunction.hwangShihDecani(spending.parameter());
            case KIM_DEMETS -> SpendingFunction.kimDemets(spending.parameter());
            case TABLE ->
                SpendingFunction.table(
                        spending.points().keySet().stream()
                                .mapToDouble(Double::doubleValue)
                                .toArray(),
                        spending.points().values().stream()
                                .mapToDouble(Double::doubleValue)
                                .toArray());
        };
    }

    /** The function of a tail, silent as long as the plan wants it to be. */
    public static SpendingFunction of(Tail tail) {
        return of(tail.spending()).startingAt(tail.silentBefore());
    }
}
