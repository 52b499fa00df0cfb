package io.tallyward.service.watch;

import io.tallyward.connector.kafka.BrokerException;
import io.tallyward.service.book.PlanSnapshot;
import java.util.Set;

/** A shard that was restored before a plan was known has left out what belongs to it. */
final class StalePlans {

    private StalePlans() {}

    /**
     * Returns if nothing of the plans that stand was left out when state was restored.
     *
     * @param leftOut experiments of which there is state that was left out
     * @throws BrokerException otherwise, upon which the shard is restored once more
     */
    static void require(PlanSnapshot snapshot, Set<String> leftOut) {
        for (String experiment : leftOut) {
            if (snapshot.entries().containsKey(experiment)) {
                throw new BrokerException("the plan of " + experiment
                        + " became known after its state was read: the state is read once more");
            }
        }
    }
}
