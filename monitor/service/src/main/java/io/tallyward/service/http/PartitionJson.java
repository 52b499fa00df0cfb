package io.tallyward.service.http;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.JsonNodeFactory;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.service.status.CountReport;
import java.time.Instant;
import java.util.SortedMap;

/**
 * The published JSON form of what was counted in the input partitions this instance hosts: totals since the first event,
 * which survive a restart, unlike the counters of a metrics endpoint.
 */
final class PartitionJson {

    private static final JsonNodeFactory JSON = JsonNodeFactory.instance;

    private PartitionJson() {}

    /** All partitions of this instance in ascending order. */
    static ArrayNode list(SortedMap<Integer, CountReport> reports) {
        ArrayNode list = JSON.arrayNode();
        reports.forEach((partition, report) -> list.add(one(partition, report)));
        return list;
    }

    private static ObjectNode one(int partition, CountReport report) {
        ObjectNode one = JSON.objectNode();
        one.put("partition", partition);
        if (report.watermarkMillis().isPresent()) {
            one.put(
                    "watermark",
                    Instant.ofEpochMilli(report.watermarkMillis().getAsLong()).toString());
        } else {
            one.putNull("watermark");
        }
        one.put("ledgerUnits", report.ledgerUnits());
        one.put("keyedByUnit", !report.unkeyed());
        ObjectNode rejected = one.putObject("rejected");
        for (RejectReason reason : RejectReason.values()) {
            rejected.put(reason.code(), report.rejected().getOrDefault(reason, 0L));
        }
        ObjectNode experiments = one.putObject("experiments");
        report.experiments().forEach((name, count) -> {
            ObjectNode experiment = experiments.putObject(name);
            experiment.put("open", count.open());
            ObjectNode outcomes = experiment.putObject("outcomes");
            for (Outcome outcome : Outcome.values()) {
                outcomes.put(outcome.code(), count.outcomes().get(outcome));
            }
        });
        return one;
    }
}
