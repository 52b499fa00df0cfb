package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.count.SealCause;
import io.tallyward.engine.count.TallyUpdate;
import io.tallyward.engine.count.WindowTally;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import java.io.IOException;

/**
 * Tally updates as JSON. The form is internal to the monitor: members are named like the record's components, times are
 * milliseconds since the epoch, and a variant is its position in the plan.
 */
public final class TallyJson {

    private TallyJson() {}

    /** The update as one JSON object in UTF-8. */
    public static byte[] write(TallyUpdate update) {
        return JsonBytes.object(update, TallyJson::members);
    }

    /**
     * Reads what {@link #write} wrote.
     *
     * @throws RecordFormatException if a member is missing or wrong; members it does not know are ignored
     */
    public static TallyUpdate read(byte[] bytes) {
        return JsonMembers.of("tally", bytes)
                .build(tally -> new TallyUpdate(
                        tally.text("experiment"),
                        tally.text("planDigest"),
                        tally.index("partition"),
                        tally.index("partitions"),
                        tally.whole("sealedUntilMillis"),
                        tally.code("cause", SealCause.values(), SealCause::code),
                        tally.list("windows", TallyJson::window)));
    }

    private static void members(JsonGenerator json, TallyUpdate update) throws IOException {
        JsonBytes.text(json, "experiment", update.experiment());
        JsonBytes.text(json, "planDigest", update.planDigest());
        json.writeNumberField("partition", update.partition());
        json.writeNumberField("partitions", update.partitions());
        json.writeNumberField("sealedUntilMillis", update.sealedUntilMillis());
        JsonBytes.text(json, "cause", update.cause().code());
        JsonBytes.list(json, "windows", update.windows(), TallyJson::window);
    }

    private static void window(JsonGenerator json, WindowTally window) throws IOException {
        json.writeNumberField("startMillis", window.startMillis());
        JsonBytes.list(json, "cells", window.cells(), TallyJson::cell);
        JsonBytes.list(json, "segments", window.segments(), TallyJson::segment);
        OutcomesJson.write(json, window.outcomes());
    }

    private static void cell(JsonGenerator json, Cell cell) throws IOException {
        json.writeNumberField("epoch", cell.epoch());
        json.writeNumberField("variant", cell.variant());
        json.writeNumberField("trials", cell.trials());
        json.writeNumberField("successes", cell.successes());
        if (cell.unitsAreTrials()) {
            json.writeNullField("clusters");
            return;
        }
        json.writeObjectFieldStart("clusters");
        json.writeNumberField("units", cell.units());
        json.writeNumberField("trialSquares", cell.trialSquares());
        json.writeNumberField("products", cell.products());
        json.writeNumberField("successSquares", cell.successSquares());
        json.writeEndObject();
    }

    private static WindowTally window(JsonMembers window) {
        return new WindowTally(
                window.whole("startMillis"),
                window.list("cells", TallyJson::cell),
                window.list("segments", TallyJson::segment),
                OutcomesJson.read(window));
    }

    private static Cell cell(JsonMembers cell) {
        return cell.build(it -> it.objectOrNull("clusters")
                .map(clusters -> new Cell(
                        it.index("epoch"),
                        it.index("variant"),
                        clusters.whole("units"),
                        it.whole("trials"),
                        it.whole("successes"),
                        clusters.whole("trialSquares"),
                        clusters.whole("products"),
                        clusters.whole("successSquares")))
                .orElseGet(() -> Cell.ofUnits(
                        it.index("epoch"), it.index("variant"), it.whole("trials"), it.whole("successes"))));
    }

    private static void segment(JsonGenerator json, SegmentCell cell) throws IOException {
        JsonBytes.text(json, "field", cell.field());
        JsonBytes.text(json, "value", cell.value());
        json.writeNumberField("epoch", cell.epoch());
        json.writeNumberField("variant", cell.variant());
        json.writeNumberField("units", cell.units());
    }

    private static SegmentCell segment(JsonMembers cell) {
        return cell.build(it -> new SegmentCell(
                it.text("field"), it.text("value"), it.index("epoch"), it.index("variant"), it.whole("units")));
    }
}
