package io.tallyward.service.plan;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.plan.AllocationEpoch;
import io.tallyward.engine.plan.CountRule;
import io.tallyward.engine.plan.FutilityPlan;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Run;
import io.tallyward.engine.plan.SplitCheckPlan;
import io.tallyward.engine.plan.TestPlan;
import io.tallyward.engine.plan.TestPlan.Sides;
import io.tallyward.engine.plan.TrustLimits;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.Checked;
import io.tallyward.service.config.document.DocumentReader;
import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Problems;
import io.tallyward.service.config.document.Values;
import java.nio.file.Path;
import java.util.List;
import java.util.Optional;

/** Reads one plan file. */
public final class PlanReader {

    private PlanReader() {}

    /** The plan in a file, or everything that is wrong with it. */
    public static Checked<Plan> read(Path file) {
        Problems problems = new Problems(file.toString());
        return plan(new DocumentReader(problems).read(file), problems);
    }

    /** The plan in a text; {@code name} stands for the file in messages. */
    public static Checked<Plan> parse(String name, String text) {
        Problems problems = new Problems(name);
        return plan(new DocumentReader(problems).parse(text), problems);
    }

    private static Checked<Plan> plan(Optional<Mapping> root, Problems problems) {
        if (root.isEmpty()) {
            return Checked.refused(problems.list());
        }
        Values values = PlanKeys.SHAPE.readRoot(root.get(), problems);
        PlanRules.check(values);
        if (!problems.isEmpty()) {
            return Checked.refused(problems.list());
        }
        Plan plan = plan(values);
        AmendmentReader.check(plan, values);
        design(plan, values);
        return problems.isEmpty() ? Checked.of(plan) : Checked.refused(problems.list());
    }

    /** A plan whose looks have no boundaries, or that needs more trials than can be counted, is found out here and not later. */
    private static void design(Plan plan, Values values) {
        for (Variant challenger : plan.challengers()) {
            try {
                PlanDesign.of(plan, challenger);
            } catch (IllegalArgumentException e) {
                values.refuse(
                        PlanKeys.TEST,
                        "a test of " + challenger.name() + " that cannot be designed, " + e.getMessage(),
                        "looks, spending and effect that have a design",
                        "Choose looks further apart, another spending, or a larger smallest-effect.");
                return;
            }
        }
    }

    private static Plan plan(Values values) {
        return new Plan(
                values.get(PlanKeys.EXPERIMENT),
                values.get(PlanKeys.QUESTION),
                values.get(PlanKeys.OWNER),
                count(values.get(PlanKeys.COUNT)),
                variants(values),
                test(values),
                looks(values.get(PlanKeys.LOOKS)),
                values.find(PlanKeys.FUTILITY).map(PlanReader::futility),
                splitCheck(values.get(PlanKeys.SPLIT_CHECK)),
                trust(values.get(PlanKeys.TRUST)),
                run(values.get(PlanKeys.RUN)),
                epochs(values),
                AmendmentReader.amendments(values));
    }

    private static CountRule count(Values count) {
        return new CountRule(
                count.get(PlanKeys.Count.BY),
                count.get(PlanKeys.Count.ATTRIBUTION),
                count.get(PlanKeys.Count.GRACE),
                count.get(PlanKeys.Count.WINDOW));
    }

    private static List<Variant> variants(Values values) {
        return values.get(PlanKeys.VARIANTS).entrySet().stream()
                .map(entry -> new Variant(
                        entry.getKey(),
                        entry.getValue().get(PlanKeys.Variants.SHARE),
                        entry.getValue().get(PlanKeys.Variants.CONTROL)))
                .toList();
    }

    private static TestPlan test(Values values) {
        Values test = values.get(PlanKeys.TEST);
        boolean two = test.get(PlanKeys.Test.SIDES) == Sides.TWO;
        double baseline = test.get(PlanKeys.Test.BASELINE);
        return new TestPlan(
                DirectionRules.tail(test, PlanKeys.Test.BENEFIT),
                two ? Optional.of(DirectionRules.tail(test, PlanKeys.Test.HARM)) : Optional.empty(),
                test.get(PlanKeys.Test.ALPHA_SHARING),
                test.get(PlanKeys.Test.CLOCK),
                test.get(PlanKeys.Test.INFORMATION),
                test.get(PlanKeys.Test.POWER),
                baseline,
                test.get(PlanKeys.Test.SMALLEST_EFFECT).difference(baseline),
                values.get(PlanKeys.BETTER),
                test.get(PlanKeys.Test.MINIMUM_PER_CELL));
    }

    private static FutilityPlan futility(Values futility) {
        return futility.find(PlanKeys.Futility.SPENDING)
                .<FutilityPlan>map(FutilityPlan.ErrorSpending::new)
                .or(() -> futility.find(PlanKeys.Futility.CONDITIONAL_POWER)
                        .map(below -> new FutilityPlan.ConditionalPower(below, futility.get(PlanKeys.Futility.UNDER))))
                .orElseGet(() -> new FutilityPlan.PredictivePower(futility.get(PlanKeys.Futility.PREDICTIVE_POWER)));
    }

    private static SplitCheckPlan splitCheck(Values splitCheck) {
        return new SplitCheckPlan(
                splitCheck.get(PlanKeys.SplitCheck.ALPHA),
                splitCheck.find(PlanKeys.SplitCheck.SEGMENTS).orElse(List.of()));
    }

    private static LookSchedule looks(Values looks) {
        return looks.find(PlanKeys.Looks.EVERY)
                .<LookSchedule>map(LookSchedule.Every::new)
                .orElseGet(() -> new LookSchedule.AtFractions(looks.get(PlanKeys.Looks.FRACTIONS)));
    }

    private static TrustLimits trust(Values trust) {
        return new TrustLimits(
                trust.get(PlanKeys.Trust.CROSSOVER_SHARE),
                trust.get(PlanKeys.Trust.LATE_SHARE),
                trust.get(PlanKeys.Trust.ORPHAN_GAP),
                trust.get(PlanKeys.Trust.STARVED_AFTER));
    }

    private static Run run(Values run) {
        return new Run(
                run.get(PlanKeys.Run.FROM), PlanRules.minimumRun(run).orElseThrow(), run.get(PlanKeys.Run.AT_MOST));
    }

    private static List<AllocationEpoch> epochs(Values values) {
        return values.find(PlanKeys.EPOCHS).orElse(List.of()).stream()
                .map(epoch -> new AllocationEpoch(epoch.get(PlanKeys.Epoch.FROM), epoch.get(PlanKeys.Epoch.SHARES)))
                .toList();
    }
}
