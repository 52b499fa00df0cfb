package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.service.command.PlannedComparison.Scenario;
import io.tallyward.service.plan.PlanWords;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.proportion.SampleSize;
import java.time.Instant;
import java.util.List;
import java.util.Optional;

/** The design of a plan as JSON. Members are only ever added, at the end; what does not exist is {@code null}. */
final class BoundariesJson {

    private BoundariesJson() {}

    static ObjectNode of(Plan plan, List<PlannedComparison> planned) {
        ObjectNode object = Output.object().put("experiment", plan.experiment());
        ArrayNode comparisons = object.putArray("comparisons");
        planned.forEach(comparison -> comparisons.add(comparison(comparison)));
        object.set("remarks", remarks(BoundariesRemarks.of(planned)));
        OverallNeed need = new OverallNeed(planned);
        object.put("plannedTrials", need.trials()).put("trialsPerDay", need.perDay());
        return object;
    }

    private static ObjectNode comparison(PlannedComparison planned) {
        TestPlan test = planned.plan().test();
        ObjectNode object = Output.object()
                .put("variant", planned.challenger().name())
                .put("alpha", planned.design().alpha())
                .put("sides", PlanWords.code(test.sides()))
                .put("spending", test.benefit().spending().code());
        ArrayNode looks = object.putArray("looks");
        planned.looks().forEach(look -> look(looks.addObject(), planned, look));
        object.put("maximumInformation", planned.design().maximumInformation());
        ObjectNode trials = object.putObject("trialsPerVariant");
        planned.design().trials().forEach(trials::put);
        object.put("inflation", planned.design().inflation());
        directions(object, planned, test);
        object.put(
                        "futilityRule",
                        planned.plan().futility().map(FutilityPlan::code).orElse(null))
                .put("power", test.power())
                .put("baseline", test.baseline())
                .put("smallestEffect", test.signedEffect())
                .put("drift", planned.design().drift())
                .put("plannedTrials", planned.plannedTrials())
                .put("trialsPerDay", planned.trialsPerDay());
        singleLook(object.putObject("singleLook"), planned);
        ObjectNode scenarios = object.putObject("scenarios");
        planned.scenarios().forEach(scenario -> scenario(scenarios.putObject(scenario.name()), scenario));
        planned.asMuchWorse().ifPresent(worse -> scenario(scenarios.putObject(worse.name()), worse));
        firstLook(object.putObject("firstLook"), planned);
        others(object, planned);
        return object;
    }

    private static void look(ObjectNode entry, PlannedComparison planned, Look look) {
        int index = look.number() - 1;
        PlannedPath path = planned.path();
        entry.put("look", look.number())
                .put("informationFraction", look.information())
                .put("alphaSpent", look.upperSpent() + look.lowerSpent())
                .put("upper", finite(look.upper()))
                .put("lower", finite(look.lower()));
        if (planned.plan().futility().isPresent()) {
            entry.put("futility", finite(path.futility(index)));
        }
        boolean higher = planned.plan().test().better() == Better.HIGHER;
        boolean harm = planned.plan().test().harm().isPresent();
        double benefitSpent = higher ? look.upperSpent() : look.lowerSpent();
        double harmSpent = higher ? look.lowerSpent() : look.upperSpent();
        entry.put(
                        "plannedTime",
                        planned.plannedTime(look).map(Instant::toString).orElse(null))
                .put("plannedTrials", planned.trials(look))
                .put("alphaSpentBenefit", benefitSpent)
                .put("alphaSpentHarm", harm ? Double.valueOf(harmSpent) : null)
                .put("upperPValue", Double.isFinite(look.upper()) ? Normal.survival(look.upper()) : null)
                .put("lowerPValue", Double.isFinite(look.lower()) ? Normal.cdf(look.lower()) : null)
                .put("benefitDifference", finite(planned.difference(path.benefit(index), look)))
                .put("harmDifference", finite(planned.difference(path.harm(index), look)))
                .put("futilityDifference", finite(planned.difference(path.futility(index), look)));
        ObjectNode stopped = entry.putObject("stoppedBy");
        for (Scenario scenario : planned.scenarios()) {
            stopped.putObject(scenario.name())
                    .put("benefit", scenario.obeyed().benefit()[index])
                    .put("harm", scenario.obeyed().harm()[index])
                    .put("futility", scenario.obeyed().futility()[index]);
        }
    }

    private static void directions(ObjectNode object, PlannedComparison planned, TestPlan test) {
        ObjectNode directions = object.putObject("directions");
        direction(directions.putObject("benefit"), planned.design().benefitLevel(), test.benefit());
        Optional<Tail> harm = test.harm();
        if (harm.isPresent()) {
            direction(directions.putObject("harm"), planned.design().harmLevel(), harm.get());
        } else {
            directions.putNull("harm");
        }
        object.put("clock", PlanWords.code(test.clock())).put("informationMeasure", PlanWords.code(test.measure()));
    }

    private static void direction(ObjectNode object, double level, Tail tail) {
        object.put("level", level).put("spending", tail.spending().code()).put("silentBefore", tail.silentBefore());
    }

    private static void singleLook(ObjectNode object, PlannedComparison planned) {
        SampleSize size = planned.singleLook();
        object.put("plannedTrials", (long) Math.ceil(size.population()));
        object.putObject("trialsPerVariant")
                .put(planned.plan().control().name(), size.controlTrials())
                .put(planned.challenger().name(), size.variantTrials());
    }

    private static void scenario(ObjectNode object, Scenario scenario) {
        object.put("controlRate", scenario.controlRate())
                .put("variantRate", scenario.rate())
                .put("drift", scenario.drift());
        chances(object.putObject("futilityObeyed"), scenario, scenario.obeyed());
        chances(object.putObject("futilityOverruled"), scenario, scenario.overruled());
    }

    private static void chances(ObjectNode object, Scenario scenario, StopChances chances) {
        int last = chances.benefit().length - 1;
        object.put("benefit", chances.power())
                .put("harm", chances.harm()[last])
                .put("futility", chances.futility()[last])
                .put("expectedInformationFraction", chances.expectedInformation())
                .put("expectedLooks", chances.expectedLooks())
                .put("expectedTrials", scenario.trials(chances));
    }

    private static void firstLook(ObjectNode object, PlannedComparison planned) {
        planned.firstLook()
                .forEach((name, cell) -> object.putObject(name)
                        .put("trials", cell.trials())
                        .put("successes", cell.successes())
                        .put("failures", cell.failures()));
    }

    private static void others(ObjectNode object, PlannedComparison planned) {
        object.put("alphaSharing", PlanWords.code(planned.plan().test().sharing()));
        ArrayNode levels = object.putArray("levelsAfterOthers");
        planned.passedOn()
                .forEach(after -> levels.addObject()
                        .put("found", after.found())
                        .put("benefit", after.benefit())
                        .put("harm", after.harm()));
        Optional<DunnettValue> dunnett = DunnettValue.of(planned.plan());
        if (dunnett.isPresent()) {
            object.putObject("dunnett")
                    .put("sides", dunnett.get().bothSides() ? "two" : "one")
                    .put("alpha", dunnett.get().alpha())
                    .put("criticalValue", dunnett.get().critical())
                    .put("evenSplit", dunnett.get().evenSplit());
        } else {
            object.putNull("dunnett");
        }
    }

    private static ArrayNode remarks(List<String> sentences) {
        ArrayNode array = Output.object().arrayNode();
        sentences.forEach(array::add);
        return array;
    }

    private static Double finite(double value) {
        return Double.isFinite(value) ? Double.valueOf(value) : null;
    }
}
