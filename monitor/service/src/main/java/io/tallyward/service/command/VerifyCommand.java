package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.verify.Difference;
import io.tallyward.engine.verify.Finding;
import io.tallyward.engine.verify.RecordVerifier;
import io.tallyward.engine.verify.RecordVerifier.Standing;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import java.util.List;
import java.util.Map;
import java.util.TreeMap;
import picocli.CommandLine.Command;
import picocli.CommandLine.Mixin;

/** Has a log of decisions prove itself. */
@Command(
        name = "verify",
        description = "Recompute a log of decisions: the chain, and every number from the counts in its records.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:Every record is what its own counts and the records before it lead to.",
            "1:A record is not, or the log is incomplete: the first one of each experiment is named.",
            "2:An argument, the configuration or the file cannot be used, or it holds no decision record.",
            "3:The broker does not answer or refuses."
        })
final class VerifyCommand extends CommandBase {

    private static final int SHOWN = 3;

    private final Map<String, String> environment;
    private final TopicReading reading;

    @Mixin
    private DecisionSource source;

    VerifyCommand(Map<String, String> environment, TopicReading reading) {
        this.environment = environment;
        this.reading = reading;
    }

    @Override
    ExitCode run(Output output) throws BadInputException {
        Verification verification = new Verification(output);
        long records = source.read(environment, reading, verification);
        if (records == 0 && !verification.unreadable) {
            throw new BadInputException(
                    List.of(Problem.of(source.name(), "no decision record", "a log of decisions", "")));
        }
        verification.report(records);
        return verification.findings.isEmpty() && !verification.unreadable ? ExitCode.FINE : ExitCode.ANSWER_IS_NO;
    }

    private static final class Verification implements DecisionSource.Reader {

        private final Output output;
        private final RecordVerifier verifier = new RecordVerifier();
        private final Map<String, Finding> findings = new TreeMap<>();
        private final Map<String, String> plans = new TreeMap<>();
        private boolean unreadable;

        Verification(Output output) {
            this.output = output;
        }

        @Override
        public void record(DecisionRecord record) {
            verifier.take(record).ifPresent(finding -> findings.put(record.experiment(), finding));
            plans.putIfAbsent(record.experiment(), record.planDigest());
        }

        @Override
        public void unreadable(String sentence) {
            unreadable = true;
            output.problem(sentence);
        }

        void report(long records) {
            verifier.standings().forEach((experiment, standing) -> {
                if (output.json()) {
                    output.line(object(experiment, standing));
                } else {
                    text(experiment, standing);
                }
            });
            if (!output.json()) {
                output.line(conclusion(records));
            }
        }

        private String conclusion(long records) {
            int experiments = plans.size();
            String all = counted(records, "record") + " of " + counted(experiments, "experiment") + ": ";
            return findings.isEmpty() && !unreadable
                    ? all + "each follows from its own counts and from the records before it."
                            + " What no log can prove: that nothing was written after its last record."
                    : all + "this log does not prove itself.";
        }

        private void text(String experiment, Standing standing) {
            Finding finding = findings.get(experiment);
            if (finding == null) {
                DecisionRecord last = standing.last();
                output.line(experiment + ": right, " + counted(standing.verified(), "record") + " up to "
                        + last.windowEnd() + ", verdict " + last.verdict().code() + ", data "
                        + last.trust().code() + ", plan "
                        + plans.get(experiment).substring(0, 12));
                return;
            }
            output.line(experiment + ": WRONG at record " + finding.sequence() + " ("
                    + counted(standing.records(), "record") + " read): " + finding.sentence() + ".");
            List<Difference> differences = finding.differences();
            for (Difference difference : differences.subList(0, Math.min(SHOWN, differences.size()))) {
                output.line("  " + difference.field() + ": " + difference.recorded() + " (computed: "
                        + difference.expected() + ")");
            }
            if (differences.size() > SHOWN) {
                output.line("  and " + (differences.size() - SHOWN) + " more; --json names them all");
            }
            output.line("  " + finding.action());
        }

        private ObjectNode object(String experiment, Standing standing) {
            ObjectNode object = Output.typed("verification")
                    .put("experiment", experiment)
                    .put("right", !findings.containsKey(experiment))
                    .put("records", standing.records())
                    .put("verified", standing.verified())
                    .put("planDigest", plans.get(experiment));
            DecisionRecord last = standing.last();
            object.put("until", last == null ? null : last.windowEnd().toString());
            object.put("verdict", last == null ? null : last.verdict().code());
            object.put("trust", last == null ? null : last.trust().code());
            Finding finding = findings.get(experiment);
            if (finding == null) {
                object.putNull("finding");
                return object;
            }
            ObjectNode found = object.putObject("finding")
                    .put("sequence", finding.sequence())
                    .put("kind", finding.kind().code())
                    .put("sentence", finding.sentence())
                    .put("action", finding.action());
            ArrayNode differences = found.putArray("differences");
            finding.differences()
                    .forEach(difference -> differences.add(Output.object()
                            .put("field", difference.field())
                            .put("recorded", difference.recorded())
                            .put("computed", difference.expected())));
            return object;
        }

        private static String counted(long number, String thing) {
            return number + " " + thing + (number == 1 ? "" : "s");
        }
    }
}
