package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import java.util.List;

/** Where a replay takes its plans and its records from. */
interface ReplayInput {

    /** The plans to count under, one per experiment. */
    List<Plan> plans() throws BadInputException;

    /** A replay of this input that has taken nothing yet. */
    Replay replay(List<Plan> plans) throws SurroundingsException;

    /** Has every replay take every record, and end. */
    void feed(List<Replay> replays) throws BadInputException;

    /** What it is called in messages. */
    String name();
}
