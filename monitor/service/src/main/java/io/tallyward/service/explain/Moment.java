package io.tallyward.service.explain;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import java.util.Map;

/**
 * A moment in the course of an experiment.
 *
 * @param plan the plan, as amended by then
 * @param record the last record by then
 * @param number how many records with a look there were by then
 * @param standings where every challenger stands, by variant in the plan's order
 */
record Moment(Plan plan, DecisionRecord record, int number, Map<String, Standing> standings) {

    boolean settled() {
        return standings.values().stream()
                .allMatch(standing -> standing.verdict().settled());
    }
}
