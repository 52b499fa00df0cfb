package io.tallyward.service.http;

import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.Clustering;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;

/** What a look says about the effect and the rest of the run; {@code null} where it says nothing. */
final class EstimatesJson {

    private EstimatesJson() {}

    static void put(ObjectNode node, Comparison look) {
        put(node, "lift", look.lift());
        put(node, look.outlook());
        put(node, look.adjusted());
        put(node, look.clustering());
    }

    private static void put(ObjectNode node, Clustering clusteringOrNull) {
        if (clusteringOrNull == null) {
            node.putNull("clustering");
        } else {
            node.putObject("clustering")
                    .put("independentZ", clusteringOrNull.independentZ())
                    .put("designEffect", clusteringOrNull.designEffect());
        }
    }

    private static void put(ObjectNode node, String name, Estimated estimatedOrNull) {
        if (estimatedOrNull == null) {
            node.putNull(name);
        } else {
            node.putObject(name)
                    .put("value", estimatedOrNull.value())
                    .put("lower", estimatedOrNull.lower())
                    .put("upper", estimatedOrNull.upper());
        }
    }

    private static void put(ObjectNode node, Outlook outlookOrNull) {
        if (outlookOrNull == null) {
            node.putNull("outlook");
        } else {
            node.putObject("outlook")
                    .put("underTrend", outlookOrNull.underTrend())
                    .put("underDesign", outlookOrNull.underDesign())
                    .put("withoutEffect", outlookOrNull.withoutEffect())
                    .put("predictive", outlookOrNull.predictive());
        }
    }

    private static void put(ObjectNode node, Adjusted adjustedOrNull) {
        if (adjustedOrNull == null) {
            node.putNull("adjusted");
            return;
        }
        ObjectNode adjusted = node.putObject("adjusted")
                .put("pValue", adjustedOrNull.pValue())
                .put("level", adjustedOrNull.level());
        put(adjusted, "drift", adjustedOrNull.drift());
        put(adjusted, "difference", adjustedOrNull.difference());
        put(adjusted, "lift", adjustedOrNull.lift());
    }
}
