package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;
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
                        estimated.real("value"), estimated.realOrNull("lower"), estimated.realOrNull("upper")))
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
                        outlook.real("underTrend"),
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
                adjusted.real("pValue"),
                adjusted.real("level"),
                present(adjusted, "drift"),
                present(adjusted, "difference"),
                estimated(adjusted, "lift"));
    }

    private static Estimated present(JsonMembers members, String name) {
        return Optional.ofNullable(estimated(members, name))
                .orElseThrow(() -> new RecordFormatException(name + ": null (expected: an object)"));
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
