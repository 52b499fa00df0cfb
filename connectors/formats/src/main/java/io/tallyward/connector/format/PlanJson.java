package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import java.io.IOException;
import java.util.LinkedHashMap;
import java.util.Locale;
import java.util.Map;
import java.util.TreeMap;

/**
 * Plans as JSON, as topics and decision records carry them: members are named like the plan's components, in their order,
 * durations are as in {@code PT30M}, and what a plan does not have is an explicit null. Equal plans have equal bytes, and a
 * plan read back has the digest it was written with. This is not the form of plan files, which people write.
 */
public final class PlanJson {

    private PlanJson() {}

    /**
     * The plan as one JSON object in UTF-8.
     *
     * @throws IllegalArgumentException if a number is infinite or NaN, or a text has no UTF-8 form
     */
    public static byte[] write(Plan plan) {
        return JsonBytes.object(plan, PlanJson::members);
    }

    /**
     * Reads what {@link #write} wrote.
     *
     * @throws RecordFormatException if a member is missing, wrong or unknown
     */
    public static Plan read(byte[] bytes) {
        return read(JsonMembers.of("plan", bytes));
    }

    /** Reads a plan that is a member of something else. */
    static Plan read(JsonMembers plan) {
        return plan.build(PlanJson::plan);
    }

    static void members(JsonGenerator json, Plan plan) throws IOException {
        JsonBytes.text(json, "experiment", plan.experiment());
        JsonBytes.text(json, "question", plan.question());
        JsonBytes.text(json, "owner", plan.owner());
        json.writeObjectFieldStart("count");
        JsonBytes.text(json, "by", code(plan.count().by()));
        JsonBytes.duration(json, "attribution", plan.count().attribution());
        JsonBytes.duration(json, "grace", plan.count().grace());
        JsonBytes.duration(json, "window", plan.count().window());
        json.writeEndObject();
        JsonBytes.list(json, "variants", plan.variants(), PlanJson::variant);
        TestPlanJson.test(json, plan.test());
        looks(json, plan.looks());
        TestPlanJson.futility(json, plan.futility().orElse(null));
        json.writeObjectFieldStart("splitCheck");
        JsonBytes.real(json, "alpha", plan.splitCheck().alpha());
        json.writeArrayFieldStart("segments");
        for (String segment : plan.splitCheck().segments()) {
            json.writeString(segment);
        }
        json.writeEndArray();
        json.writeEndObject();
        json.writeObjectFieldStart("trust");
        JsonBytes.real(json, "crossoverShare", plan.trust().crossoverShare());
        JsonBytes.real(json, "lateShare", plan.trust().lateShare());
        JsonBytes.real(json, "orphanGap", plan.trust().orphanGap());
        JsonBytes.duration(json, "starvedAfter", plan.trust().starvedAfter());
        json.writeEndObject();
        json.writeObjectFieldStart("run");
        JsonBytes.instant(json, "from", plan.run().from());
        JsonBytes.duration(json, "atLeast", plan.run().atLeast());
        JsonBytes.duration(json, "atMost", plan.run().atMost());
        json.writeEndObject();
        JsonBytes.list(json, "epochs", plan.epochs(), PlanJson::epoch);
        JsonBytes.list(json, "amendments", plan.amendments(), PlanJson::amendment);
    }

    private static Plan plan(JsonMembers plan) {
        plan.only(
                "experiment",
                "question",
                "owner",
                "count",
                "variants",
                "test",
                "looks",
                "futility",
                "splitCheck",
                "trust",
                "run",
                "epochs",
                "amendments");
        return new Plan(
                plan.text("experiment"),
                plan.text("question"),
                plan.text("owner"),
                plan.object("count").build(PlanJson::count),
                plan.list("variants", variant -> variant.build(PlanJson::variant)),
                plan.object("test").build(TestPlanJson::test),
                plan.object("looks").build(PlanJson::looks),
                plan.objectOrNull("futility").map(futility -> futility.build(TestPlanJson::futility)),
                plan.object("splitCheck").build(PlanJson::splitCheck),
                plan.object("trust").build(PlanJson::trust),
                plan.object("run").build(PlanJson::run),
                plan.list("epochs", epoch -> epoch.build(PlanJson::epoch)),
                plan.list("amendments", PlanJson::amendment));
    }

    private static CountRule count(JsonMembers count) {
        count.only("by", "attribution", "grace", "window");
        return new CountRule(
                count.code("by", CountBy.values(), PlanJson::code),
                count.duration("attribution"),
                count.duration("grace"),
                count.duration("window"));
    }

    private static void variant(JsonGenerator json, Variant variant) throws IOException {
        JsonBytes.text(json, "name", variant.name());
        JsonBytes.real(json, "share", variant.share());
        json.writeBooleanField("control", variant.control());
    }

    private static Variant variant(JsonMembers variant) {
        variant.only("name", "share", "control");
        return new Variant(variant.text("name"), variant.real("share"), variant.flag("control"));
    }

    private static void looks(JsonGenerator json, LookSchedule looks) throws IOException {
        json.writeObjectFieldStart("looks");
        if (looks instanceof LookSchedule.Every every) {
            JsonBytes.duration(json, "every", every.interval());
        } else if (looks instanceof LookSchedule.AtFractions at) {
            json.writeArrayFieldStart("fractions");
            for (double fraction : at.fractions()) {
                json.writeNumber(fraction);
            }
            json.writeEndArray();
        }
        json.writeEndObject();
    }

    private static LookSchedule looks(JsonMembers looks) {
        if (looks.has("every")) {
            looks.only("every");
            return new LookSchedule.Every(looks.duration("every"));
        }
        looks.only("fractions");
        return new LookSchedule.AtFractions(looks.reals("fractions"));
    }

    private static SplitCheckPlan splitCheck(JsonMembers check) {
        check.only("alpha", "segments");
        return new SplitCheckPlan(check.real("alpha"), check.texts("segments"));
    }

    private static TrustLimits trust(JsonMembers trust) {
        trust.only("crossoverShare", "lateShare", "orphanGap", "starvedAfter");
        return new TrustLimits(
                trust.real("crossoverShare"),
                trust.real("lateShare"),
                trust.real("orphanGap"),
                trust.duration("starvedAfter"));
    }

    private static Run run(JsonMembers run) {
        run.only("from", "atLeast", "atMost");
        return new Run(run.instant("from"), run.duration("atLeast"), run.duration("atMost"));
    }

    private static void epoch(JsonGenerator json, AllocationEpoch epoch) throws IOException {
        JsonBytes.instant(json, "from", epoch.from());
        shares(json, epoch.shares());
    }

    private static AllocationEpoch epoch(JsonMembers epoch) {
        epoch.only("from", "shares");
        return new AllocationEpoch(epoch.instant("from"), shares(epoch));
    }

    private static void shares(JsonGenerator json, Map<String, Double> shares) throws IOException {
        json.writeObjectFieldStart("shares");
        for (Map.Entry<String, Double> share : new TreeMap<>(shares).entrySet()) {
            JsonBytes.real(json, share.getKey(), share.getValue());
        }
        json.writeEndObject();
    }

    private static Map<String, Double> shares(JsonMembers members) {
        JsonMembers shares = members.object("shares");
        Map<String, Double> all = new LinkedHashMap<>();
        shares.names().forEach(variant -> all.put(variant, shares.real(variant)));
        return all;
    }

    /** An amendment's members, as a decision record carries one too. */
    static void amendment(JsonGenerator json, Amendment amendment) throws IOException {
        JsonBytes.instant(json, "at", amendment.at());
        JsonBytes.text(json, "reason", amendment.reason());
        json.writeObjectFieldStart("change");
        if (amendment.change() instanceof Amendment.End end) {
            JsonBytes.instant(json, "end", end.end());
        } else if (amendment.change() instanceof Amendment.Shares other) {
            shares(json, other.shares());
        } else {
            json.writeBooleanField("stop", true);
        }
        json.writeEndObject();
    }

    static Amendment amendment(JsonMembers amendment) {
        amendment.only("at", "reason", "change");
        return amendment.build(it -> new Amendment(
                it.instant("at"), it.text("reason"), it.object("change").build(PlanJson::change)));
    }

    private static Amendment.Change change(JsonMembers change) {
        if (change.has("end")) {
            change.only("end");
            return new Amendment.End(change.instant("end"));
        }
        if (change.has("shares")) {
            change.only("shares");
            return new Amendment.Shares(shares(change));
        }
        change.only("stop");
        if (!change.flag("stop")) {
            throw change.unexpected("stop", "true");
        }
        return new Amendment.Stop();
    }

    /** The name of a constant as it stands in plans, as in {@code pass-on}. */
    static String code(Enum<?> constant) {
        return constant.name().toLowerCase(Locale.ROOT).replace('_', '-');
    }
}
