package io.tallyward.service.command;

import io.tallyward.connector.format.PlanEntryJson;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanBook.Ruling;
import io.tallyward.service.book.PlanDesk;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.Problem;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;
import java.util.stream.Collectors;

/**
 * What the book of plans would make of the plan files; nothing is proposed.
 *
 * @param standings what each plan would be, by experiment: {@code new}, {@code changed}, {@code standing}, {@code frozen},
 *     {@code amended} or {@code refused}; empty when the book was not asked
 * @param problems the plans that would be refused, and a book that cannot be read
 */
record BookCheck(Map<String, String> standings, List<Problem> problems) {

    /** The book was not asked. */
    static final BookCheck SKIPPED = new BookCheck(Map.of(), List.of());

    /** How the brokers are asked. */
    record Brokers(TopicLookup lookup, TopicReading reading) {}

    /**
     * Reads the book.
     *
     * @param now what an amendment has to be ahead of
     */
    static BookCheck of(ServiceConfig config, List<Plan> plans, Brokers brokers, Instant now) {
        PlanBook book = new PlanBook();
        String topic = config.name() + "-plans";
        Map<String, String> properties = BrokerCheck.clientProperties(config);
        try {
            if (brokers.lookup().partitions(properties, List.of(topic)).containsKey(topic)) {
                brokers.reading().read(properties, topic, value -> book.take(PlanEntryJson.read(value)));
            }
        } catch (RuntimeException unread) {
            return new BookCheck(
                    Map.of(), List.of(Problem.of("topic " + topic, String.valueOf(unread.getMessage()), "", "")));
        }
        Instant notBefore = PlanDesk.notBefore(now, config.input().maxSkew());
        Map<String, String> standings = new TreeMap<>();
        List<Problem> problems = new ArrayList<>();
        for (Plan plan : plans) {
            Ruling ruling = book.rule(plan, notBefore);
            standings.put(
                    plan.experiment(),
                    standing(ruling, book.entry(plan.experiment()).orElse(null)));
            if (ruling instanceof Ruling.Refused refused) {
                problems.add(Problem.of(
                        config.plans().toString(),
                        "the plan of " + plan.experiment() + " would be refused, and the frozen plan stands: "
                                + refused.reason(),
                        "",
                        "Put what was frozen back, or give the changed plan a new experiment name."));
            }
        }
        return new BookCheck(standings, problems);
    }

    private static String standing(Ruling ruling, PlanBook.Entry entryOrNull) {
        if (ruling instanceof Ruling.Refused) {
            return "refused";
        }
        if (ruling instanceof Ruling.Amended) {
            return "amended";
        }
        if (entryOrNull == null) {
            return "new";
        }
        if (ruling instanceof Ruling.Adopted) {
            return "changed";
        }
        return entryOrNull.frozen() ? "frozen" : "standing";
    }

    boolean asked() {
        return !standings.isEmpty() || !problems.isEmpty();
    }

    /** As in {@code frozen: quay-banner; new: fare-chip}. */
    String text() {
        return standings.isEmpty() ? "not as it has to be" : byStanding();
    }

    private String byStanding() {
        return standings.entrySet().stream()
                .collect(Collectors.groupingBy(
                        Map.Entry::getValue,
                        TreeMap::new,
                        Collectors.mapping(Map.Entry::getKey, Collectors.joining(", "))))
                .entrySet()
                .stream()
                .map(group -> group.getKey() + ": " + group.getValue())
                .collect(Collectors.joining("; "));
    }
}
