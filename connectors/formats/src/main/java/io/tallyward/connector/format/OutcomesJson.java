package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonGenerator;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import java.io.IOException;
import java.util.Arrays;

/** Outcome counts as an object with one member per published code, zeros included. */
final class OutcomesJson {

    private OutcomesJson() {}

    static void write(JsonGenerator json, OutcomeCounts outcomes) throws IOException {
        json.writeObjectFieldStart("outcomes");
        for (Outcome outcome : Outcome.values()) {
            json.writeNumberField(outcome.code(), outcomes.get(outcome));
        }
        json.writeEndObject();
    }

    static OutcomeCounts read(JsonMembers members) {
        JsonMembers codes = members.object("outcomes");
        codes.only(Arrays.stream(Outcome.values()).map(Outcome::code).toArray(String[]::new));
        OutcomeCounts.Builder outcomes = new OutcomeCounts.Builder();
        for (Outcome outcome : Outcome.values()) {
            outcomes.add(outcome, codes.whole(outcome.code()));
        }
        return outcomes.build();
    }
}
