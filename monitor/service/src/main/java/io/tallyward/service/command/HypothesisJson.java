package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.service.command.Hypothesis.Course;
import io.tallyward.service.command.Hypothesis.Place;
import java.util.Optional;

/** Two plans over the same events as one JSON object, of a type that nobody takes for a decision. */
final class HypothesisJson {

    private static final String PLANNED = "planned";
    private static final String AS_IF = "asIf";

    private final Hypothesis hypothesis;

    HypothesisJson(Hypothesis hypothesis) {
        this.hypothesis = hypothesis;
    }

    ObjectNode object() {
        ObjectNode object = Output.typed("hypothetical")
                .put("experiment", hypothesis.planned().plan().experiment())
                .put("remark", Hypothesis.REMARK);
        ArrayNode terms = object.putArray("differences");
        hypothesis
                .differences()
                .forEach(term -> terms.addObject()
                        .put("key", term.key())
                        .put(PLANNED, term.frozen())
                        .put(AS_IF, term.proposed()));
        standing(object.putObject(PLANNED), hypothesis.planned());
        standing(object.putObject(AS_IF), hypothesis.asIf());
        ArrayNode looks = object.putArray("looks");
        for (Place place : hypothesis.looks()) {
            ObjectNode look = looks.addObject()
                    .put("windowEnd", place.windowEnd().toString())
                    .put("variant", place.variant());
            put(look, PLANNED, hypothesis.planned().look(place));
            put(look, AS_IF, hypothesis.asIf().look(place));
        }
        return object;
    }

    private static void standing(ObjectNode object, Course course) {
        course.view()
                .ifPresent(view -> object.put("verdict", view.verdict().code())
                        .put("trust", view.trust().code()));
        ArrayNode endings = object.putArray("endings");
        course.plan()
                .challengers()
                .forEach(variant -> course.ending(variant.name()).ifPresent(place -> {
                    Comparison look = course.look(place).orElseThrow();
                    endings.addObject()
                            .put("variant", variant.name())
                            .put("verdict", Hypothesis.verdict(look).code())
                            .put("held", look.held() != null)
                            .put("look", look.look())
                            .put("windowEnd", place.windowEnd().toString());
                }));
    }

    private static void put(ObjectNode object, String name, Optional<Comparison> found) {
        if (found.isEmpty()) {
            object.putNull(name);
            return;
        }
        Comparison look = found.get();
        object.putObject(name)
                .put("look", look.look())
                .put("z", look.z())
                .put("informationFraction", look.informationFraction())
                .put("upper", look.upper())
                .put("lower", look.lower())
                .put("futility", look.futility())
                .put("alphaSpent", look.alphaSpent())
                .put("verdict", Hypothesis.verdict(look).code())
                .put("held", look.held() != null);
    }
}
