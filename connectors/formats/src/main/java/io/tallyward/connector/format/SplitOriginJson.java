package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import java.io.IOException;

/** The member {@code origin} of a record's split; null while there is no mismatch. */
final class SplitOriginJson {

    private SplitOriginJson() {}

    static void write(JsonGenerator json, SplitOrigin origin) throws IOException {
        if (origin == null) {
            json.writeNullField("origin");
            return;
        }
        json.writeObjectFieldStart("origin");
        json.writeNumberField("epoch", origin.epoch());
        JsonBytes.instant(json, "beganFrom", origin.beganFrom());
        JsonBytes.instant(json, "beganUntil", origin.beganUntil());
        JsonBytes.real(json, "logLikelihoodGain", origin.logLikelihoodGain());
        JsonBytes.list(json, "since", origin.since(), SplitOriginJson::units);
        segment(json, origin.worst());
        json.writeEndObject();
    }

    private static void segment(JsonGenerator json, SegmentSplit segment) throws IOException {
        if (segment == null) {
            json.writeNullField("worst");
            return;
        }
        json.writeObjectFieldStart("worst");
        JsonBytes.text(json, "field", segment.field());
        JsonBytes.text(json, "value", segment.value());
        JsonBytes.list(json, "units", segment.units(), SplitOriginJson::units);
        JsonBytes.list(json, "elsewhere", segment.elsewhere(), SplitOriginJson::units);
        JsonBytes.real(json, "chiSquare", segment.chiSquare());
        JsonBytes.real(json, "adjustedPValue", segment.adjustedPValue());
        JsonBytes.real(json, "contrastPValue", segment.contrastPValue());
        json.writeNumberField("judged", segment.judged());
        json.writeBooleanField("standsOut", segment.standsOut());
        json.writeEndObject();
    }

    private static void units(JsonGenerator json, PlannedUnits units) throws IOException {
        JsonBytes.text(json, "variant", units.variant());
        JsonBytes.real(json, "planned", units.planned());
        json.writeNumberField("units", units.units());
    }

    /** The origin in a record's split, or null. */
    static SplitOrigin read(JsonMembers split) {
        return split.objectOrNull("origin")
                .map(origin -> new SplitOrigin(
                        origin.only(SplitOrigin.class).index("epoch"),
                        origin.instant("beganFrom"),
                        origin.instant("beganUntil"),
                        origin.real("logLikelihoodGain"),
                        origin.list("since", SplitOriginJson::units),
                        origin.objectOrNull("worst")
                                .map(SplitOriginJson::segment)
                                .orElse(null)))
                .orElse(null);
    }

    private static SegmentSplit segment(JsonMembers segment) {
        return new SegmentSplit(
                segment.only(SegmentSplit.class).text("field"),
                segment.text("value"),
                segment.list("units", SplitOriginJson::units),
                segment.list("elsewhere", SplitOriginJson::units),
                segment.real("chiSquare"),
                segment.real("adjustedPValue"),
                segment.real("contrastPValue"),
                segment.index("judged"),
                segment.flag("standsOut"));
    }

    private static PlannedUnits units(JsonMembers units) {
        return new PlannedUnits(
                units.only(PlannedUnits.class).text("variant"), units.real("planned"), units.whole("units"));
    }
}
