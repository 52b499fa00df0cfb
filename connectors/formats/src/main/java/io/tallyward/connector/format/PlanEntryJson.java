package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.plan.PlanEntry;
import java.io.IOException;

/** Entries of the book of plans as JSON, the form of the topic of plans. */
public final class PlanEntryJson {

    private static final String PROPOSAL = "proposal";
    private static final String FREEZE = "freeze";

    private PlanEntryJson() {}

    /** The entry as one JSON object in UTF-8. */
    public static byte[] write(PlanEntry entry) {
        return JsonBytes.object(entry, PlanEntryJson::members);
    }

    private static void members(JsonGenerator json, PlanEntry entry) throws IOException {
        if (entry instanceof PlanEntry.Proposal proposal) {
            JsonBytes.text(json, "entry", PROPOSAL);
            JsonBytes.text(json, "by", proposal.by());
            JsonBytes.instant(json, "notBefore", proposal.notBefore());
            json.writeObjectFieldStart("plan");
            PlanJson.members(json, proposal.plan());
            json.writeEndObject();
        } else {
            JsonBytes.text(json, "entry", FREEZE);
            JsonBytes.text(json, "experiment", entry.experiment());
        }
    }

    /**
     * Reads what {@link #write} wrote.
     *
     * @throws RecordFormatException if a member is missing, wrong or unknown
     */
    public static PlanEntry read(byte[] bytes) {
        JsonMembers entry = JsonMembers.of("entry of the book of plans", bytes);
        String kind = entry.text("entry");
        if (kind.equals(PROPOSAL)) {
            entry.only("entry", "by", "notBefore", "plan");
            return new PlanEntry.Proposal(
                    PlanJson.read(entry.object("plan")), entry.instant("notBefore"), entry.text("by"));
        }
        if (kind.equals(FREEZE)) {
            entry.only("entry", "experiment");
            return new PlanEntry.Freeze(entry.text("experiment"));
        }
        throw new RecordFormatException("entry of the book of plans: " + Quoted.of(kind) + " (expected: " + PROPOSAL
                + " or " + FREEZE + "); it was written by a later version, which has to run here too");
    }
}
