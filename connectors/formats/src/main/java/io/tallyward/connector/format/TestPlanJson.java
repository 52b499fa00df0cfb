package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.FutilityPlan.Assumption;
import io.tallyward.engine.plan.Spending;
import io.tallyward.engine.plan.Tail;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.AlphaSharing;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.TestPlan.SpendingClock;
import java.io.IOException;
import java.util.List;
import java.util.Map;
import java.util.SortedMap;
import java.util.TreeMap;

/** The members {@code test} and {@code futility} of a plan. */
final class TestPlanJson {

    private static final String ERROR_SPENDING = "error-spending";
    private static final String CONDITIONAL_POWER = "conditional-power";
    private static final String PREDICTIVE_POWER = "predictive-power";

    private TestPlanJson() {}

    static void test(JsonGenerator json, TestPlan test) throws IOException {
        json.writeObjectFieldStart("test");
        JsonBytes.objectOrNull(json, "benefit", test.benefit(), TestPlanJson::tail);
        JsonBytes.objectOrNull(json, "harm", test.harm().orElse(null), TestPlanJson::tail);
        JsonBytes.text(json, "sharing", PlanJson.code(test.sharing()));
        JsonBytes.text(json, "clock", PlanJson.code(test.clock()));
        JsonBytes.text(json, "measure", PlanJson.code(test.measure()));
        JsonBytes.real(json, "power", test.power());
        JsonBytes.real(json, "baseline", test.baseline());
        JsonBytes.real(json, "smallestEffect", test.smallestEffect());
        JsonBytes.text(json, "better", PlanJson.code(test.better()));
        json.writeNumberField("minimumPerCell", test.minimumPerCell());
        json.writeEndObject();
    }

    static TestPlan test(JsonMembers test) {
        test.only(
                "benefit",
                "harm",
                "sharing",
                "clock",
                "measure",
                "power",
                "baseline",
                "smallestEffect",
                "better",
                "minimumPerCell");
        return new TestPlan(
                test.object("benefit").build(TestPlanJson::tail),
                test.objectOrNull("harm").map(harm -> harm.build(TestPlanJson::tail)),
                test.code("sharing", AlphaSharing.values(), PlanJson::code),
                test.code("clock", SpendingClock.values(), PlanJson::code),
                test.code("measure", InformationMeasure.values(), PlanJson::code),
                test.real("power"),
                test.real("baseline"),
                test.real("smallestEffect"),
                test.code("better", Better.values(), PlanJson::code),
                test.index("minimumPerCell"));
    }

    private static void tail(JsonGenerator json, Tail tail) throws IOException {
        JsonBytes.real(json, "alpha", tail.alpha());
        spending(json, tail.spending());
        JsonBytes.real(json, "silentBefore", tail.silentBefore());
    }

    private static Tail tail(JsonMembers tail) {
        tail.only("alpha", "spending", "silentBefore");
        return new Tail(
                tail.real("alpha"), tail.object("spending").build(TestPlanJson::spending), tail.real("silentBefore"));
    }

    private static void spending(JsonGenerator json, Spending spending) throws IOException {
        json.writeObjectFieldStart("spending");
        JsonBytes.text(json, "family", spending.family().code());
        JsonBytes.real(json, "parameter", spending.parameter());
        JsonBytes.list(json, "points", List.copyOf(spending.points().entrySet()), TestPlanJson::point);
        json.writeEndObject();
    }

    private static void point(JsonGenerator json, Map.Entry<Double, Double> point) throws IOException {
        JsonBytes.real(json, "fraction", point.getKey());
        JsonBytes.real(json, "share", point.getValue());
    }

    private static Spending spending(JsonMembers spending) {
        spending.only("family", "parameter", "points");
        SortedMap<Double, Double> points = new TreeMap<>();
        spending.list("points", point -> {
            point.only("fraction", "share");
            return points.put(point.real("fraction"), point.real("share"));
        });
        return new Spending(
                spending.code("family", Spending.Family.values(), Spending.Family::code),
                spending.real("parameter"),
                points);
    }

    static void futility(JsonGenerator json, FutilityPlan futility) throws IOException {
        if (futility == null) {
            json.writeNullField("futility");
            return;
        }
        json.writeObjectFieldStart("futility");
        if (futility instanceof FutilityPlan.ErrorSpending by) {
            JsonBytes.text(json, "rule", ERROR_SPENDING);
            spending(json, by.spending());
        } else if (futility instanceof FutilityPlan.ConditionalPower by) {
            JsonBytes.text(json, "rule", CONDITIONAL_POWER);
            JsonBytes.real(json, "below", by.below());
            JsonBytes.text(json, "under", by.under().code());
        } else if (futility instanceof FutilityPlan.PredictivePower by) {
            JsonBytes.text(json, "rule", PREDICTIVE_POWER);
            JsonBytes.real(json, "below", by.below());
        }
        json.writeEndObject();
    }

    static FutilityPlan futility(JsonMembers futility) {
        return switch (futility.text("rule")) {
            case ERROR_SPENDING -> {
                futility.only("rule", "spending");
                yield new FutilityPlan.ErrorSpending(futility.object("spending").build(TestPlanJson::spending));
            }
            case CONDITIONAL_POWER -> {
                futility.only("rule", "below", "under");
                yield new FutilityPlan.ConditionalPower(
                        futility.real("below"), futility.code("under", Assumption.values(), Assumption::code));
            }
            case PREDICTIVE_POWER -> {
                futility.only("rule", "below");
                yield new FutilityPlan.PredictivePower(futility.real("below"));
            }
            default ->
                throw futility.unexpected(
                        "rule", "one of " + ERROR_SPENDING + ", " + CONDITIONAL_POWER + ", " + PREDICTIVE_POWER);
        };
    }
}
