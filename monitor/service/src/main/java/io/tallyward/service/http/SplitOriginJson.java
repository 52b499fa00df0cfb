package io.tallyward.service.http;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import java.util.List;

/** The member {@code origin} of an experiment's split, in the form it has in a decision record. */
final class SplitOriginJson {

    private SplitOriginJson() {}

    /** @param origin null while there is no mismatch */
    static void put(ObjectNode split, SplitOrigin origin) {
        if (origin == null) {
            split.putNull("origin");
            return;
        }
        ObjectNode node = split.putObject("origin");
        node.put("epoch", origin.epoch());
        node.put("beganFrom", origin.beganFrom().toString());
        node.put("beganUntil", origin.beganUntil().toString());
        node.put("logLikelihoodGain", origin.logLikelihoodGain());
        put(node.putArray("since"), origin.since());
        SegmentSplit worst = origin.worst();
        if (worst == null) {
            node.putNull("worst");
            return;
        }
        ObjectNode segment = node.putObject("worst");
        segment.put("field", worst.field()).put("value", worst.value());
        put(segment.putArray("units"), worst.units());
        put(segment.putArray("elsewhere"), worst.elsewhere());
        segment.put("chiSquare", worst.chiSquare());
        segment.put("adjustedPValue", worst.adjustedPValue());
        segment.put("contrastPValue", worst.contrastPValue());
        segment.put("judged", worst.judged());
        segment.put("standsOut", worst.standsOut());
    }

    private static void put(ArrayNode list, List<PlannedUnits> units) {
        units.forEach(variant -> list.addObject()
                .put("variant", variant.variant())
                .put("planned", variant.planned())
                .put("units", variant.units()));
    }
}
