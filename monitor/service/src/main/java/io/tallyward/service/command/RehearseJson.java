package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.rehearse.Ending;
import io.tallyward.service.rehearse.Mean;
import io.tallyward.service.rehearse.Rate;
import io.tallyward.service.rehearse.RehearsalReport;
import io.tallyward.service.rehearse.RehearsalReport.Arm;
import io.tallyward.service.rehearse.RehearsalReport.Estimates;
import io.tallyward.service.rehearse.RehearsalReport.Stop;
import io.tallyward.service.rehearse.RehearsalRequest;
import io.tallyward.statistics.proportion.Interval;
import java.util.List;
import java.util.Locale;

/**
 * A rehearsal as one JSON object. Beside every figure {@code x} stands its Monte Carlo standard error, {@code
 * xStandardError}, and beside every rate its 95 % interval, {@code xInterval}. Members are only ever added, at the end.
 */
final class RehearseJson {

    private RehearseJson() {}

    static ObjectNode object(
            Plan plan, RehearsalRequest request, RehearsalReport report, List<PlannedComparison> planned) {
        ObjectNode object = Output.object().put("experiment", plan.experiment()).put("runs", request.runs());
        object.put("seed", request.seed());
        ObjectNode rates = object.putObject("rates");
        double[] trueRates = request.rates();
        for (int i = 0; i < trueRates.length; i++) {
            rates.put(plan.variants().get(i).name(), trueRates[i]);
        }
        object.put("split", request.fixedSplit() ? "fixed" : "random")
                .put("step", ScalarType.written(report.step()))
                .put("steps", report.steps())
                .put("trialsOfFullRun", report.arrivals());
        rate(object, "rejectionRate", report.rejection());
        rate(object, "benefitRate", report.benefit());
        rate(object, "harmRate", report.harm());
        rate(object, "futilityRate", report.futility());
        rate(object, "exhaustedRate", report.exhausted());
        rate(object, "withheldRate", report.withheld());
        rate(object, "mismatchRate", report.mismatch());
        rate(object, "naivePeeking", report.naivePeeking());
        mean(object, "expectedLooks", report.looks());
        mean(object, "expectedTrials", report.trials());
        mean(object, "expectedDays", report.days());
        ArrayNode challengers = object.putArray("challengers");
        for (int i = 0; i < planned.size(); i++) {
            challengers.add(challenger(report.arms().get(i), planned.get(i)));
        }
        object.put("alpha", plan.test().alpha())
                .put("power", plan.test().power())
                .put("plannedTrials", new OverallNeed(planned).trials());
        mean(object, "expectedWaitingLooks", report.waited());
        RehearseRemarks.views(plan).ifPresent(remark -> object.put("remark", remark));
        report.falseAlarm().ifPresent(rate -> rate(object, "falseAlarmRate", rate));
        return object;
    }

    private static ObjectNode challenger(Arm arm, PlannedComparison planned) {
        ObjectNode object = Output.object().put("variant", arm.variant()).put("trueDifference", arm.trueDifference());
        rate(object, "rejectionRate", arm.rejection());
        for (Ending ending : Ending.values()) {
            rate(object, code(ending) + "Rate", arm.endings().get(ending));
        }
        rate(object, "naivePeeking", arm.naivePeeking());
        mean(object, "expectedLooks", arm.looks());
        ArrayNode stops = object.putArray("stops");
        arm.stops().forEach(stop -> stops.add(stop(stop)));
        arm.estimates().ifPresent(estimates -> object.set("estimates", estimates(estimates)));
        object.put("powerFutilityObeyed", planned.underSmallestEffect().obeyed().power());
        return object;
    }

    private static ObjectNode stop(Stop stop) {
        ObjectNode object = Output.object().put("look", stop.look()).put("runs", stop.total());
        for (Ending ending : Ending.values()) {
            object.put(code(ending), stop.runs().get(ending));
        }
        return object;
    }

    private static ObjectNode estimates(Estimates estimates) {
        ObjectNode object =
                Output.object().put("runs", estimates.naiveBias().count()).put("level", estimates.level());
        ObjectNode naive = object.putObject("naive");
        mean(naive, "bias", estimates.naiveBias());
        rate(naive, "tooLow", estimates.naiveTooLow());
        rate(naive, "coverage", estimates.naiveCoverage());
        rate(object.putObject("repeated"), "coverage", estimates.repeatedCoverage());
        ObjectNode adjusted = object.putObject("adjusted");
        mean(adjusted, "bias", estimates.adjustedBias());
        rate(adjusted, "tooLow", estimates.adjustedTooLow());
        rate(adjusted, "coverage", estimates.stagewiseCoverage());
        return object;
    }

    private static void rate(ObjectNode object, String name, Rate rate) {
        Interval interval = rate.interval();
        object.put(name, rate.value()).put(name + "StandardError", rate.standardError());
        object.putArray(name + "Interval").add(interval.lower()).add(interval.upper());
    }

    private static void mean(ObjectNode object, String name, Mean mean) {
        object.put(name, mean.value()).put(name + "StandardError", mean.standardError());
    }

    static String code(Ending ending) {
        return ending.name().toLowerCase(Locale.ROOT);
    }
}
