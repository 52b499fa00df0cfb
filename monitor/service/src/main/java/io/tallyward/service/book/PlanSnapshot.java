package io.tallyward.service.book;

import io.tallyward.engine.plan.PlanBook;
import java.util.List;
import java.util.Map;

/**
 * The book of plans at one moment.
 *
 * @param version rises with every entry that was read
 * @param entries what stands, by experiment
 * @param refusals the latest proposals that were refused, by experiment
 */
public record PlanSnapshot(
        long version, Map<String, PlanBook.Entry> entries, Map<String, List<PlanBook.Refusal>> refusals) {}
