package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Silence;
import io.tallyward.engine.record.SplitPeak;
import io.tallyward.engine.record.SplitPeak.EpochUnits;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.io.IOException;
import java.util.Optional;

/**
 * Decision records as JSON, the published form: {@code schema/decision.schema.json}. Every record begins with
 * {@code "type":"decision"}; what a record does not have is an explicit null. Doubles survive to the last bit, so that a
 * record read back has the digest it was written with.
 */
public final class DecisionJson {

    private static final String TYPE = "decision";

    private DecisionJson() {}

    /**
     * The record as one JSON object in UTF-8.
     *
     * @throws IllegalArgumentException if a number is infinite or NaN
     */
    public static byte[] write(DecisionRecord decision) {
        return JsonBytes.object(decision, DecisionJson::members);
    }

    /**
     * Reads what {@link #write} wrote. The record's hash is not verified here.
     *
     * @throws RecordFormatException if a member is missing, wrong or not known, as its digest would not cover it
     */
    public static DecisionRecord read(byte[] bytes) {
        JsonMembers decision = JsonMembers.of(TYPE, bytes);
        if (!decision.text("type").equals(TYPE)) {
            throw decision.unexpected("type", TYPE);
        }
        return read(decision);
    }

    /**
     * The same among documents of other types, which are passed over.
     *
     * @throws RecordFormatException if it is a decision, or has no type, and a member is missing, wrong or not known
     */
    public static Optional<DecisionRecord> readIfDecision(byte[] bytes) {
        JsonMembers document = JsonMembers.of(TYPE, bytes);
        return document.text("type").equals(TYPE) ? Optional.of(read(document)) : Optional.empty();
    }

    private static DecisionRecord read(JsonMembers decision) {
        decision.only(DecisionRecord.class, "type");
        return new DecisionRecord(
                decision.text("experiment"),
                decision.index("sequence"),
                decision.code("occasion", Occasion.values(), Occasion::code),
                decision.instant("windowEnd"),
                decision.text("planDigest"),
                decision.objectOrNull("plan").map(PlanJson::read).orElse(null),
                decision.objectOrNull("amendment").map(PlanJson::amendment).orElse(null),
                decision.list("counts", DecisionJson::count),
                OutcomesJson.read(decision),
                decision.whole("idleSealed"),
                split(decision.object("split")),
                decision.code("trust", Trust.values(), Trust::code),
                decision.text("trustReason"),
                decision.objectOrNull("silence").map(DecisionJson::silence).orElse(null),
                verdict(decision, "verdict"),
                decision.list("comparisons", DecisionJson::comparison),
                decision.text("engineVersion"),
                decision.text("previous"),
                decision.text("hash"));
    }

    private static void members(JsonGenerator json, DecisionRecord decision) throws IOException {
        JsonBytes.text(json, "type", TYPE);
        JsonBytes.text(json, "experiment", decision.experiment());
        json.writeNumberField("sequence", decision.sequence());
        JsonBytes.text(json, "occasion", decision.occasion().code());
        JsonBytes.instant(json, "windowEnd", decision.windowEnd());
        JsonBytes.text(json, "planDigest", decision.planDigest());
        JsonBytes.objectOrNull(json, "plan", decision.plan(), PlanJson::members);
        JsonBytes.objectOrNull(json, "amendment", decision.amendment(), PlanJson::amendment);
        JsonBytes.list(json, "counts", decision.counts(), DecisionJson::count);
        OutcomesJson.write(json, decision.outcomes());
        json.writeNumberField("idleSealed", decision.idleSealed());
        split(json, decision.split());
        JsonBytes.text(json, "trust", decision.trust().code());
        JsonBytes.text(json, "trustReason", decision.trustReason());
        JsonBytes.objectOrNull(json, "silence", decision.silence(), DecisionJson::silence);
        JsonBytes.text(json, "verdict", decision.verdict().code());
        JsonBytes.list(json, "comparisons", decision.comparisons(), DecisionJson::comparison);
        JsonBytes.text(json, "engineVersion", decision.engineVersion());
        JsonBytes.text(json, "previous", decision.previous());
        JsonBytes.text(json, "hash", decision.hash());
    }

    private static void count(JsonGenerator json, VariantCount count) throws IOException {
        json.writeNumberField("epoch", count.epoch());
        JsonBytes.text(json, "variant", count.variant());
        json.writeNumberField("trials", count.trials());
        json.writeNumberField("successes", count.successes());
        EstimatesJson.write(json, "unitTotals", count.unitTotals());
    }

    private static VariantCount count(JsonMembers count) {
        count.only(VariantCount.class);
        return new VariantCount(
                count.index("epoch"),
                count.text("variant"),
                count.whole("trials"),
                count.whole("successes"),
                EstimatesJson.unitTotals(count, "unitTotals"));
    }

    private static void split(JsonGenerator json, Split split) throws IOException {
        json.writeObjectFieldStart("split");
        JsonBytes.real(json, "logBayesFactor", split.logBayesFactor());
        JsonBytes.real(json, "sequentialPValue", split.sequentialPValue());
        JsonBytes.real(json, "pearsonChiSquare", split.pearsonChiSquare());
        json.writeNumberField("pearsonDegreesOfFreedom", split.pearsonDegreesOfFreedom());
        JsonBytes.real(json, "pearsonPValue", split.pearsonPValue());
        JsonBytes.objectOrNull(json, "peak", split.peak(), DecisionJson::peak);
        SplitOriginJson.write(json, split.origin());
        json.writeEndObject();
    }

    private static Split split(JsonMembers split) {
        split.only(Split.class);
        return new Split(
                split.real("logBayesFactor"),
                split.real("sequentialPValue"),
                split.real("pearsonChiSquare"),
                split.index("pearsonDegreesOfFreedom"),
                split.real("pearsonPValue"),
                split.objectOrNull("peak").map(DecisionJson::peak).orElse(null),
                SplitOriginJson.read(split));
    }

    private static void peak(JsonGenerator json, SplitPeak peak) throws IOException {
        JsonBytes.real(json, "logBayesFactor", peak.logBayesFactor());
        JsonBytes.list(json, "units", peak.units(), DecisionJson::epochUnits);
    }

    private static SplitPeak peak(JsonMembers peak) {
        peak.only(SplitPeak.class);
        return new SplitPeak(
                peak.real("logBayesFactor"),
                peak.list(
                        "units",
                        units -> new EpochUnits(
                                units.only(EpochUnits.class).index("epoch"),
                                units.text("variant"),
                                units.whole("units"))));
    }

    private static void epochUnits(JsonGenerator json, EpochUnits units) throws IOException {
        json.writeNumberField("epoch", units.epoch());
        JsonBytes.text(json, "variant", units.variant());
        json.writeNumberField("units", units.units());
    }

    private static void silence(JsonGenerator json, Silence silence) throws IOException {
        JsonBytes.text(json, "variant", silence.variant());
        JsonBytes.instant(json, "since", silence.since());
        json.writeNumberField("due", silence.due());
    }

    private static Silence silence(JsonMembers silence) {
        silence.only(Silence.class);
        return new Silence(silence.text("variant"), silence.instant("since"), silence.whole("due"));
    }

    private static void comparison(JsonGenerator json, Comparison comparison) throws IOException {
        JsonBytes.text(json, "variant", comparison.variant());
        json.writeNumberField("look", comparison.look());
        JsonBytes.real(json, "z", comparison.z());
        JsonBytes.real(json, "information", comparison.information());
        JsonBytes.real(json, "informationFraction", comparison.informationFraction());
        JsonBytes.real(json, "spendingTime", comparison.spendingTime());
        JsonBytes.real(json, "level", comparison.level());
        JsonBytes.real(json, "alphaSpent", comparison.alphaSpent());
        JsonBytes.realOrNull(json, "upper", comparison.upper());
        JsonBytes.realOrNull(json, "lower", comparison.lower());
        JsonBytes.realOrNull(json, "futility", comparison.futility());
        JsonBytes.real(json, "difference", comparison.difference());
        JsonBytes.realOrNull(json, "differenceLower", comparison.differenceLower());
        JsonBytes.realOrNull(json, "differenceUpper", comparison.differenceUpper());
        EstimatesJson.write(json, "lift", comparison.lift());
        EstimatesJson.write(json, "outlook", comparison.outlook());
        EstimatesJson.write(json, "adjusted", comparison.adjusted());
        EstimatesJson.write(json, "clustering", comparison.clustering());
        JsonBytes.text(json, "verdict", comparison.verdict().code());
        json.writeStringField(
                "held", comparison.held() == null ? null : comparison.held().code());
        JsonBytes.text(json, "reason", comparison.reason());
    }

    private static Comparison comparison(JsonMembers comparison) {
        comparison.only(Comparison.class);
        return new Comparison(
                comparison.text("variant"),
                comparison.index("look"),
                comparison.real("z"),
                comparison.real("information"),
                comparison.real("informationFraction"),
                comparison.real("spendingTime"),
                comparison.real("level"),
                comparison.real("alphaSpent"),
                comparison.realOrNull("upper"),
                comparison.realOrNull("lower"),
                comparison.realOrNull("futility"),
                comparison.real("difference"),
                comparison.realOrNull("differenceLower"),
                comparison.realOrNull("differenceUpper"),
                EstimatesJson.estimated(comparison, "lift"),
                EstimatesJson.outlook(comparison, "outlook"),
                EstimatesJson.adjusted(comparison, "adjusted"),
                EstimatesJson.clustering(comparison, "clustering"),
                verdict(comparison, "verdict"),
                comparison.codeOrNull("held", Verdict.values(), Verdict::code),
                comparison.text("reason"));
    }

    private static Verdict verdict(JsonMembers members, String name) {
        return members.code(name, Verdict.values(), Verdict::code);
    }
}
