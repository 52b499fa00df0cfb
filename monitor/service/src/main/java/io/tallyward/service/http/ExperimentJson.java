package io.tallyward.service.http;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.JsonNodeFactory;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.decide.ExperimentView.LookPoint;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.Verdict;
import java.util.Collection;

/**
 * The published JSON form of an experiment's state. A value that does not exist yet, or is not a finite number, is
 * {@code null}; every member is always there. Times are RFC 3339 in UTC.
 */
final class ExperimentJson {

    private static final JsonNodeFactory JSON = JsonNodeFactory.instance;

    /** Stands for a look that has not been taken: no number of it can be written. */
    private static final Comparison NO_LOOK = new Comparison(
            "",
            0,
            Double.NaN,
            Double.NaN,
            Double.NaN,
            Double.NaN,
            Double.NaN,
            Double.NaN,
            null,
            null,
            null,
            Double.NaN,
            null,
            null,
            null,
            null,
            null,
            Verdict.WAITING,
            null,
            null);

    private ExperimentJson() {}

    /** All experiments, without their history. */
    static ArrayNode list(Collection<ExperimentView> views) {
        ArrayNode list = JSON.arrayNode();
        views.forEach(view -> list.add(summary(view)));
        return list;
    }

    /** One experiment with its history. */
    static ObjectNode one(ExperimentView view) {
        ObjectNode one = summary(view);
        ArrayNode history = one.putArray("history");
        for (LookPoint point : view.history()) {
            ObjectNode entry = history.addObject();
            entry.put("windowEnd", point.windowEnd().toString());
            Comparison look = point.comparison();
            entry.put("variant", look.variant());
            entry.put("verdict", look.verdict().code());
            look(entry, look, view.maximumInformation().get(look.variant()));
        }
        return one;
    }

    private static ObjectNode summary(ExperimentView view) {
        ObjectNode node = JSON.objectNode();
        node.put("experiment", view.plan().experiment());
        node.put("question", view.plan().question());
        node.put("owner", view.plan().owner());
        node.put("planDigest", view.planDigest());
        node.put("verdict", view.verdict().code());
        node.put("trust", view.trust().code());
        node.put("trustReason", view.trustReason());
        node.put("completeUntil", view.completeUntil().map(Object::toString).orElse(null));
        node.put("looksTaken", view.looksTaken());
        node.put("looksDelayed", view.looksDelayed());
        node.put("delayReason", view.delayReason());
        ArrayNode counts = node.putArray("counts");
        view.counts()
                .forEach(count -> counts.addObject()
                        .put("epoch", count.epoch())
                        .put("variant", count.variant())
                        .put("units", count.units())
                        .put("trials", count.trials())
                        .put("successes", count.successes()));
        ObjectNode outcomes = node.putObject("outcomes");
        for (Outcome outcome : Outcome.values()) {
            outcomes.put(outcome.code(), view.outcomes().get(outcome));
        }
        split(node.putObject("split"), view.split());
        ArrayNode comparisons = node.putArray("comparisons");
        view.plan().challengers().forEach(challenger -> comparisons.add(comparison(view, challenger)));
        node.put("lastRecord", view.lastRecord());
        return node;
    }

    private static void split(ObjectNode node, Split split) {
        real(node, "logBayesFactor", split.logBayesFactor());
        real(node, "sequentialPValue", split.sequentialPValue());
        real(node, "pearsonChiSquare", split.pearsonChiSquare());
        node.put("pearsonDegreesOfFreedom", split.pearsonDegreesOfFreedom());
        real(node, "pearsonPValue", split.pearsonPValue());
        SplitOriginJson.put(node, split.origin());
    }

    private static ObjectNode comparison(ExperimentView view, Variant challenger) {
        ObjectNode node = JSON.objectNode();
        node.put("variant", challenger.name());
        node.put(
                "verdict",
                view.verdicts().getOrDefault(challenger.name(), Verdict.WAITING).code());
        look(
                node,
                view.comparisons().get(challenger.name()),
                view.maximumInformation().get(challenger.name()));
        Verdict held = view.held().get(challenger.name());
        node.put("held", held == null ? null : held.code());
        return node;
    }

    private static void look(ObjectNode node, Comparison lookOrNull, Double maximumInformation) {
        Comparison look = lookOrNull == null ? NO_LOOK : lookOrNull;
        node.put("held", look.held() == null ? null : look.held().code());
        node.put("look", lookOrNull == null ? null : look.look());
        real(node, "z", look.z());
        real(node, "information", look.information());
        real(node, "informationFraction", look.informationFraction());
        real(node, "maximumInformation", maximumInformation);
        real(node, "spendingTime", look.spendingTime());
        real(node, "level", look.level());
        real(node, "alphaSpent", look.alphaSpent());
        real(node, "upper", look.upper());
        real(node, "lower", look.lower());
        real(node, "futility", look.futility());
        real(node, "difference", look.difference());
        real(node, "differenceLower", look.differenceLower());
        real(node, "differenceUpper", look.differenceUpper());
        EstimatesJson.put(node, look);
        node.put("reason", look.reason());
    }

    private static void real(ObjectNode node, String name, Double valueOrNull) {
        if (valueOrNull != null && Double.isFinite(valueOrNull)) {
            node.put(name, valueOrNull);
        } else {
            node.putNull(name);
        }
    }
}
