package io.tallyward.service.command;

import io.tallyward.connector.format.PublishedSchema;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.plan.PlanSchema;
import java.util.List;
import java.util.stream.Collectors;
import java.util.stream.Stream;
import picocli.CommandLine.Command;
import picocli.CommandLine.Parameters;

/** Prints a published schema. */
@Command(
        name = "schema",
        description = "Print the JSON Schema (2020-12) of plan files, events, decision records or notices.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:The schema was printed.",
            "2:There is no schema of that name.",
            "3:Something unforeseen happened."
        })
final class SchemaCommand extends CommandBase {

    private static final String PLAN = "plan";

    @Parameters(paramLabel = "NAME", description = "One of plan, event, decision, notice.")
    private String name;

    @Override
    ExitCode run(Output output) throws BadInputException {
        if (name.equals(PLAN)) {
            output.line(PlanSchema.text());
            return ExitCode.FINE;
        }
        List<PublishedSchema> schemas = List.of(PublishedSchema.values());
        PublishedSchema schema = schemas.stream()
                .filter(each -> each.code().equals(name))
                .findFirst()
                .orElseThrow(() -> new BadInputException(List.of(Problem.of(
                        "",
                        "schema " + name,
                        Stream.concat(Stream.of(PLAN), schemas.stream().map(PublishedSchema::code))
                                .collect(Collectors.joining(", ")),
                        ""))));
        schema.text().lines().forEach(output::line);
        return ExitCode.FINE;
    }
}
