package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import java.io.IOException;
import java.util.Arrays;
import java.util.stream.Stream;

/**
 * Outcome counts as an object with one member per published code, zeros included, and the orphans by the variant that they name,
 * in the order of the plan and up to the last that has any.
 */
final class OutcomesJson {

    private static final String ORPHANS = "orphanByVariant";

    private OutcomesJson() {}

    static void write(JsonGenerator json, OutcomeCounts outcomes) throws IOException {
        json.writeObjectFieldStart("outcomes");
        for (Outcome outcome : Outcome.values()) {
            json.writeNumberField(outcome.code(), outcomes.get(outcome));
        }
        json.writeArrayFieldStart(ORPHANS);
        for (long orphans : outcomes.orphansByVariant()) {
            json.writeNumber(orphans);
        }
        json.writeEndArray();
        json.writeEndObject();
    }

    static OutcomeCounts read(JsonMembers members) {
        JsonMembers codes = members.object("outcomes");
        codes.only(Stream.concat(Arrays.stream(Outcome.values()).map(Outcome::code), Stream.of(ORPHANS))
                .toArray(String[]::new));
        OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder();
        for (Outcome outcome : Outcome.values()) {
            outcomes.add(outcome, codes.whole(outcome.code()));
        }
        int variant = 0;
        for (long orphans : codes.wholes(ORPHANS)) {
            outcomes.addOrphans(variant, orphans);
            variant++;
        }
        return outcomes.build();
    }
}
