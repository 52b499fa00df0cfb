package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import java.nio.file.Path;
import java.util.List;
import java.util.Optional;
import picocli.CommandLine.Command;
import picocli.CommandLine.Option;

/** What a plan means before any data: its looks, boundaries and size. */
@Command(
        name = "boundaries",
        description = "Show the planned looks of a plan: boundaries, trials, power and how likely it stops when.",
        mixinStandardHelpOptions = true,
        exitCodeListHeading = ExitCode.HEADING,
        exitCodeList = {
            "0:The design is shown.",
            "2:An argument or the plan cannot be used.",
            "3:Something unforeseen happened."
        })
final class BoundariesCommand extends CommandBase {

    @Option(names = "--plan", required = true, paramLabel = "FILE", description = "The plan file.")
    private Path file;

    @Option(
            names = "--rates",
            paramLabel = "NAME=RATE,...",
            description =
                    "Also show how the plan fares under these success rates, as in plain=0.12,wide=0.126. Variants that "
                            + "are not named have the baseline of the plan.")
    private String rates;

    @Option(names = "--all-looks", description = "Print every look of a long plan, not one in every few.")
    private boolean allLooks;

    @Override
    ExitCode run(Output output) throws BadInputException {
        Plan plan = PlanReader.read(file).orElseThrow();
        Optional<double[]> truth = rates == null ? Optional.empty() : Optional.of(RateList.parse(rates, plan));
        List<PlannedComparison> planned = PlannedComparison.all(file, plan, truth);
        if (output.json()) {
            output.line(BoundariesJson.of(plan, planned));
        } else {
            new BoundariesText(plan, allLooks).lines(planned).forEach(output::line);
        }
        return ExitCode.FINE;
    }
}
