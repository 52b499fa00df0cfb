package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Verdict;
import io.tallyward.engine.verify.Finding;
import io.tallyward.engine.verify.RecordVerifier;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.explain.Course;
import io.tallyward.service.explain.Explanation;
import io.tallyward.service.explain.Explanation.Row;
import io.tallyward.service.plan.PlanWords;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalInt;
import java.util.Set;
import java.util.TreeSet;
import picocli.CommandLine.Command;
import picocli.CommandLine.Mixin;
import picocli.CommandLine.Option;

/** Tells what was decided, for whoever asked. */
@Command(
        name = "explain",
        description = "Tell in plain words what was decided about an experiment, and why.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:The decision was explained.",
            "1:It was explained as far as possible, but the log does not prove itself: see verify.",
            "2:An argument, the configuration or the file cannot be used, or it holds no such decision.",
            "3:The broker does not answer or refuses."
        })
final class ExplainCommand extends CommandBase {

    private final Map<String, String> environment;
    private final TopicReading reading;

    @Mixin
    private DecisionSource source;

    @Option(names = "--experiment", required = true, paramLabel = "NAME", description = "The experiment.")
    private String experiment;

    @Option(
            names = "--look",
            paramLabel = "N",
            description =
                    "The record with the N-th look (default: the one that settled the experiment, or else the last).")
    private Integer look;

    ExplainCommand(Map<String, String> environment, TopicReading reading) {
        this.environment = environment;
        this.reading = reading;
    }

    @Override
    ExitCode run(Output output) throws BadInputException {
        Following following = new Following(output);
        source.read(environment, reading, following);
        Optional<Explanation> explanation = following.course.explanation();
        if (explanation.isEmpty()) {
            throw new BadInputException(List.of(following.nothing()));
        }
        if (output.json()) {
            output.line(object(explanation.get(), following.finding));
        } else {
            text(output, explanation.get());
            following.finding.ifPresent(finding -> output.problem("Do not rely on this: " + experiment
                    + " does not prove itself. At record " + finding.sequence() + " " + finding.sentence()
                    + "; verify says more."));
        }
        return following.finding.isEmpty() && !following.unreadable ? ExitCode.FINE : ExitCode.ANSWER_IS_NO;
    }

    private final class Following implements DecisionSource.Reader {

        private final Output output;
        private final Course course = new Course(look == null ? OptionalInt.empty() : OptionalInt.of(look));
        private final RecordVerifier verifier = new RecordVerifier();
        private final Set<String> experiments = new TreeSet<>();
        private Optional<Finding> finding = Optional.empty();
        private boolean unreadable;

        Following(Output output) {
            this.output = output;
        }

        @Override
        public void record(DecisionRecord record) {
            experiments.add(record.experiment());
            if (record.experiment().equals(experiment)) {
                Optional<Finding> found = verifier.take(record);
                finding = finding.or(() -> found);
                course.take(record);
            }
        }

        @Override
        public void unreadable(String sentence) {
            unreadable = true;
            output.problem(sentence);
        }

        private Problem nothing() {
            if (!experiments.contains(experiment)) {
                String known =
                        experiments.isEmpty() ? "a log of decisions" : "one of " + String.join(", ", experiments);
                return Problem.of(source.name(), "no record of " + experiment, known, "");
            }
            return look == null
                    ? Problem.of(source.name(), "no plan of " + experiment, "its log from the first record on", "")
                    : Problem.of(
                            source.name(),
                            "no look " + look + " at " + experiment,
                            course.looks() == 0 ? "no look: none was taken" : "1 to " + course.looks(),
                            "");
        }
    }

    private static void text(Output output, Explanation explanation) {
        output.line(explanation.headline());
        output.line("");
        for (String paragraph : explanation.paragraphs()) {
            BoundariesText.wrapped(paragraph, 0).forEach(output::line);
            output.line("");
        }
        Table table = new Table(
                "variant",
                PlanWords.trials(explanation.plan()).replace("trials", "units"),
                "clicked",
                "rate",
                "difference",
                "it may be",
                "verdict");
        for (Row row : explanation.rows()) {
            table.row(
                    row.variant(),
                    String.format(Locale.ROOT, "%,d", row.trials()),
                    String.format(Locale.ROOT, "%,d", row.successes()),
                    String.format(Locale.ROOT, "%.2f %%", 100 * row.rate()),
                    row.difference() == null ? "" : points(row.difference()),
                    row.difference() == null ? "" : range(row),
                    row.held() != null
                            ? row.held().code() + ", held"
                            : row.verdict() == null ? "control" : row.verdict().code());
        }
        table.lines().forEach(output::line);
        if (explanation.plan().epochCount() > 1) {
            output.line("The rates mix stretches of different split; the difference does not.");
        }
    }

    private static String range(Row row) {
        boolean below = row.lower() == null || row.lower() < -1;
        boolean above = row.upper() == null || row.upper() > 1;
        if (below || above) {
            return below && above
                    ? "anything"
                    : below ? points(row.upper()) + " or less" : points(row.lower()) + " or more";
        }
        return points(row.lower()) + " to " + points(row.upper());
    }

    private static String points(double difference) {
        return String.format(Locale.ROOT, "%+.2f", 100 * difference);
    }

    private static ObjectNode object(Explanation explanation, Optional<Finding> finding) {
        DecisionRecord record = explanation.record();
        ObjectNode object = Output.typed("explanation")
                .put("experiment", record.experiment())
                .put("record", record.sequence())
                .put("hash", record.hash())
                .put("looks", explanation.look())
                .put("windowEnd", record.windowEnd().toString())
                .put("verdict", record.verdict().code())
                .put("trust", record.trust().code())
                .put("right", finding.isEmpty())
                .put("headline", explanation.headline());
        ArrayNode paragraphs = object.putArray("paragraphs");
        explanation.paragraphs().forEach(paragraphs::add);
        ArrayNode variants = object.putArray("variants");
        for (Row row : explanation.rows()) {
            variants.add(Output.object()
                    .put("variant", row.variant())
                    .put("trials", row.trials())
                    .put("successes", row.successes())
                    .put("rate", row.rate())
                    .put("difference", row.difference())
                    .put("lower", row.lower())
                    .put("upper", row.upper())
                    .put("verdict", code(row.verdict()))
                    .put("held", code(row.held())));
        }
        return object;
    }

    private static String code(Verdict verdict) {
        return verdict == null ? null : verdict.code();
    }
}
