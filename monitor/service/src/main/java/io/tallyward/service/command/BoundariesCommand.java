package io.tallyward.service.command;

import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.plan.PlanReader;
import io.tallyward.statistics.boundary.Look;
import java.nio.file.Path;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import picocli.CommandLine.Command;
import picocli.CommandLine.Option;

/** What a plan means before any data: its looks, boundaries and size. */
@Command(
        name = "boundaries",
        description = "Show the planned looks of a plan, their boundaries and how many trials it needs.",
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

    @Override
    ExitCode run(Output output) throws BadInputException {
        Plan plan = PlanReader.read(file).orElseThrow();
        Map<Variant, PlanDesign> designs = designs(plan);
        if (output.json()) {
            output.line(json(plan, designs));
        } else {
            new BoundariesText(plan).lines(designs).forEach(output::line);
        }
        return ExitCode.FINE;
    }

    private Map<Variant, PlanDesign> designs(Plan plan) throws BadInputException {
        Map<Variant, PlanDesign> designs = new LinkedHashMap<>();
        for (Variant challenger : plan.challengers()) {
            try {
                designs.put(challenger, PlanDesign.of(plan, challenger));
            } catch (IllegalArgumentException e) {
                throw new BadInputException(List.of(Problem.of(
                        file.toString(),
                        "the boundaries for " + challenger.name() + " cannot be computed: " + e.getMessage(),
                        "",
                        "Choose fewer looks or another spending function.")));
            }
        }
        return designs;
    }

    private static ObjectNode json(Plan plan, Map<Variant, PlanDesign> designs) {
        ObjectNode object = Output.object().put("experiment", plan.experiment());
        ArrayNode comparisons = object.putArray("comparisons");
        designs.forEach((challenger, design) -> comparisons.add(comparison(plan, challenger, design)));
        return object;
    }

    private static ObjectNode comparison(Plan plan, Variant challenger, PlanDesign design) {
        ObjectNode object = Output.object()
                .put("variant", challenger.name())
                .put("alpha", design.alpha())
                .put("sides", sides(plan.test().sides()))
                .put("spending", plan.test().benefit().spending().code());
        PlannedPath path = new PlannedPath(plan, design);
        ArrayNode looks = object.putArray("looks");
        for (Look look : design.looks()) {
            ObjectNode entry = looks.addObject()
                    .put("look", look.number())
                    .put("informationFraction", look.information())
                    .put("alphaSpent", look.upperSpent() + look.lowerSpent())
                    .put("upper", finite(look.upper()))
                    .put("lower", finite(look.lower()));
            if (plan.futility().isPresent()) {
                entry.put("futility", finite(path.futility(look.number() - 1)));
            }
        }
        object.put("maximumInformation", design.maximumInformation());
        ObjectNode trials = object.putObject("trialsPerVariant");
        design.trials().forEach(trials::put);
        return object.put("inflation", design.inflation());
    }

    static String sides(Sides sides) {
        return sides.name().toLowerCase(Locale.ROOT);
    }

    private static Double finite(double boundary) {
        return Double.isFinite(boundary) ? Double.valueOf(boundary) : null;
    }
}
