package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.connector.format.DecisionJson;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.command.Replay.WindowKey;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import java.util.List;

/** A replay as JSON lines: windows, outcomes, the input as a whole, then the decision records. */
final class ReplayJson {

    private final Replay replay;

    ReplayJson(Replay replay) {
        this.replay = replay;
    }

    void writeTo(Output output) {
        replay.windows().forEach((key, counts) -> writeWindow(output, key, counts));
        replay.plans().keySet().forEach(experiment -> output.line(outcomes(experiment)));
        output.line(input());
        replay.decisions()
                .forEach(decision -> output.line(new String(DecisionJson.write(decision), StandardCharsets.UTF_8)));
    }

    private void writeWindow(Output output, WindowKey key, long[][] counts) {
        List<Variant> variants = replay.plans().get(key.experiment()).variants();
        for (int i = 0; i < counts.length; i++) {
            output.line(Output.typed("window")
                    .put("experiment", key.experiment())
                    .put("epoch", key.epoch())
                    .put("start", Instant.ofEpochMilli(key.startMillis()).toString())
                    .put("variant", variants.get(i).name())
                    .put("trials", counts[i][0])
                    .put("successes", counts[i][1]));
        }
    }

    private ObjectNode outcomes(String experiment) {
        ObjectNode object = Output.typed("outcomes").put("experiment", experiment);
        OutcomeCounts outcomes = replay.outcomes(experiment);
        for (Outcome outcome : Outcome.values()) {
            object.put(outcome.code(), outcomes.get(outcome));
        }
        return object;
    }

    private ObjectNode input() {
        ObjectNode object = Output.typed("input").put("events", replay.events());
        ObjectNode rejected = object.putObject("rejected");
        for (RejectReason reason : RejectReason.values()) {
            rejected.put(reason.code(), replay.rejections().counts().get(reason));
        }
        return object;
    }
}
