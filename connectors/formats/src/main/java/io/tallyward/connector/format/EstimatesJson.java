package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.Clustering;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.UnitTotals;
import java.io.IOException;
import java.util.Optional;

/** Estimates and outlooks as members of a decision record; each an object, or an explicit null where there is none. */
final class EstimatesJson {

    private EstimatesJson() {}

    static void write(JsonGenerator json, String name, Estimated estimated) throws IOException {
        if (begin(json, name, estimated)) {
            JsonBytes.real(json, "value", estimated.value());
            JsonBytes.realOrNull(json, "lower", estimated.lower());
            JsonBytes.realOrNull(json, "upper", estimated.upper());
            json.writeEndObject();
        }
    }

    static Estimated estimated(JsonMembers members, String name) {
        return members.objectOrNull(name)
                .map(estimated -> new Estimated(
                        estimated.only(Estimated.class).real("value"),
                        estimated.realOrNull("lower"),
                        estimated.realOrNull("upper")))
                .orElse(null);
    }

    static void write(JsonGenerator json, String name, Outlook outlook) throws IOException {
        if (begin(json, name, outlook)) {
            JsonBytes.real(json, "underTrend", outlook.underTrend());
            JsonBytes.real(json, "underDesign", outlook.underDesign());
            JsonBytes.real(json, "withoutEffect", outlook.withoutEffect());
            JsonBytes.real(json, "predictive", outlook.predictive());
            json.writeEndObject();
        }
    }

    static Outlook outlook(JsonMembers members, String name) {
        return members.objectOrNull(name)
                .map(outlook -> new Outlook(
                        outlook.only(Outlook.class).real("underTrend"),
                        outlook.real("underDesign"),
                        outlook.real("withoutEffect"),
                        outlook.real("predictive")))
                .orElse(null);
    }

    static void write(JsonGenerator json, String name, Adjusted adjusted) throws IOException {
        if (begin(json, name, adjusted)) {
            JsonBytes.real(json, "pValue", adjusted.pValue());
            JsonBytes.real(json, "level", adjusted.level());
            write(json, "drift", adjusted.drift());
            write(json, "difference", adjusted.difference());
            write(json, "lift", adjusted.lift());
            json.writeEndObject();
        }
    }

    static Adjusted adjusted(JsonMembers members, String name) {
        return members.objectOrNull(name).map(EstimatesJson::adjusted).orElse(null);
    }

    private static Adjusted adjusted(JsonMembers adjusted) {
        return new Adjusted(
                adjusted.only(Adjusted.class).real("pValue"),
                adjusted.real("level"),
                present(adjusted, "drift"),
                present(adjusted, "difference"),
                estimated(adjusted, "lift"));
    }

    private static Estimated present(JsonMembers members, String name) {
        return Optional.ofNullable(estimated(members, name))
                .orElseThrow(() -> new RecordFormatException(name + ": null (expected: an object)"));
    }

    static void write(JsonGenerator json, String name, Clustering clustering) throws IOException {
        if (begin(json, name, clustering)) {
            JsonBytes.real(json, "independentZ", clustering.independentZ());
            JsonBytes.real(json, "designEffect", clustering.designEffect());
            json.writeEndObject();
        }
    }

    static Clustering clustering(JsonMembers members, String name) {
        return members.objectOrNull(name)
                .map(clustering -> new Clustering(
                        clustering.only(Clustering.class).real("independentZ"), clustering.real("designEffect")))
                .orElse(null);
    }

    static void write(JsonGenerator json, String name, UnitTotals totals) throws IOException {
        if (begin(json, name, totals)) {
            json.writeNumberField("units", totals.units());
            json.writeNumberField("trialSquares", totals.trialSquares());
            json.writeNumberField("products", totals.products());
            json.writeNumberField("successSquares", totals.successSquares());
            json.writeEndObject();
        }
    }

    static UnitTotals unitTotals(JsonMembers members, String name) {
        return members.objectOrNull(name)
                .map(totals -> new UnitTotals(
                        totals.only(UnitTotals.class).whole("units"),
                        totals.whole("trialSquares"),
                        totals.whole("products"),
                        totals.whole("successSquares")))
                .orElse(null);
    }

    private static boolean begin(JsonGenerator json, String name, Object value) throws IOException {
        if (value == null) {
            json.writeNullField(name);
            return false;
        }
        json.writeObjectFieldStart(name);
        return true;
    }
}
