package io.tallyward.service.book;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import java.util.Collection;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;

/** Where shards learn which plans stand. Thread-safe. */
public interface PlanSource {

    /**
     * What stands, as far as is known here.
     *
     * @throws io.tallyward.connector.kafka.BrokerException until everything has been read once
     */
    PlanSnapshot snapshot();

    /**
     * Freezes the plans that stand for some experiments, and returns what stands then.
     *
     * @throws io.tallyward.connector.kafka.BrokerException when that cannot be written and read back
     */
    PlanSnapshot freeze(Collection<String> experiments);

    /**
     * What stands, everything considered that was written before.
     *
     * @throws io.tallyward.connector.kafka.BrokerException when that cannot be read
     */
    PlanSnapshot catchUp();

    /**
     * Returns if what is known here is recent enough to count and decide by.
     *
     * @throws io.tallyward.connector.kafka.BrokerException otherwise
     */
    void requireRecent();

    /** Plans that stand once and for all. */
    static PlanSource fixed(List<Plan> plans) {
        Map<String, PlanBook.Entry> entries = new LinkedHashMap<>();
        plans.forEach(plan -> entries.put(plan.experiment(), new PlanBook.Entry(plan, true)));
        PlanSnapshot standing = new PlanSnapshot(0, entries, Map.of());
        return new PlanSource() {
            @Override
            public PlanSnapshot snapshot() {
                return standing;
            }

            @Override
            public PlanSnapshot freeze(Collection<String> experiments) {
                return standing;
            }

            @Override
            public PlanSnapshot catchUp() {
                return standing;
            }

            @Override
            public void requireRecent() {
                // They never change.
            }
        };
    }
}
