package io.tallyward.service.command;

import io.tallyward.engine.decide.PlanDesign;
import io.tallyward.engine.decide.TailLevels;
import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.InformationMeasure;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.proportion.SampleSize;
import java.nio.file.Path;
import java.time.Instant;
import java.util.ArrayList;
import java.util.HashSet;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;

/** What a plan means for one challenger before any data, in the numbers that people and machines are shown. */
final class PlannedComparison {

    /** With fewer successes or failures than this expected in a variant, the normal law of z is a rough one. */
    static final double FEW = 10;

    private static final double MILLIS_PER_DAY = 86_400_000;

    private final Plan plan;
    private final Variant challenger;
    private final PlanDesign design;
    private final PlannedPath path;
    private final double controlShare;
    private final double share;
    private final List<Scenario> scenarios;
    private final Optional<Scenario> asMuchWorse;

    /**
     * @param rates success rate of every variant, in the plan's order, for one more scenario; empty for none
     */
    PlannedComparison(Plan plan, Variant challenger, PlanDesign design, Optional<double[]> rates) {
        this.plan = plan;
        this.challenger = challenger;
        this.design = design;
        path = new PlannedPath(plan, design);
        double[] shares = plan.sharesIn(plan.epochs().size());
        controlShare = shares[plan.variantIndex(plan.control().name())];
        share = shares[plan.variantIndex(challenger.name())];
        List<Truth> truths = truths(rates);
        Optional<Truth> worse = mirrored();
        List<Truth> all = new ArrayList<>(truths);
        worse.ifPresent(all::add);
        List<Scenario> answers = scenarios(all);
        scenarios = List.copyOf(answers.subList(0, truths.size()));
        asMuchWorse = worse.map(truth -> answers.get(truths.size()));
    }

    /**
     * What a plan means for each of its challengers, in the plan's order.
     *
     * @param file where the plan was read from, for messages
     * @param rates as for one comparison
     * @throws BadInputException if boundaries cannot be computed
     */
    static List<PlannedComparison> all(Path file, Plan plan, Optional<double[]> rates) throws BadInputException {
        List<PlannedComparison> planned = new ArrayList<>();
        for (Variant challenger : plan.challengers()) {
            try {
                planned.add(new PlannedComparison(plan, challenger, PlanDesign.of(plan, challenger), rates));
            } catch (IllegalArgumentException e) {
                throw new BadInputException(List.of(Problem.of(
                        file.toString(),
                        "the boundaries for " + challenger.name() + " cannot be computed: " + e.getMessage(),
                        "",
                        rates.isEmpty()
                                ? "Choose fewer looks or another spending function."
                                : "Choose rates that lie closer together, fewer looks or another spending function.")));
            }
        }
        return planned;
    }

    /**
     * What the truth may be, and how a path then ends.
     *
     * @param name as in JSON
     * @param words as in tables
     * @param controlRate success rate of the control
     * @param rate success rate of the challenger
     * @param drift expected z at full information, towards the benefit
     * @param population trials of all variants at full information
     * @param obeyed when and why a path stops if futility is obeyed; as without futility if the plan has none
     * @param overruled the same if it is overruled
     */
    record Scenario(
            String name,
            String words,
            double controlRate,
            double rate,
            double drift,
            double population,
            StopChances obeyed,
            StopChances overruled) {

        /** Expected trials of all variants at the end of a path. */
        double trials(StopChances chances) {
            return population * chances.expectedInformation();
        }
    }

    /**
     * The levels of the comparison once some of the other challengers have been found, each direction by itself: nobody is
     * found in both.
     *
     * @param found how many others
     * @param benefit level of the benefit if they were found to be a benefit
     * @param harm level of harm if they were found to do harm
     */
    record PassedOn(int found, double benefit, double harm) {}

    /**
     * What a variant brings to the first look.
     *
     * @param trials its planned trials by then
     * @param rate its planned success rate
     */
    record FirstCell(double trials, double rate) {
        double successes() {
            return trials * rate;
        }

        double failures() {
            return trials * (1 - rate);
        }

        boolean few() {
            return Math.min(successes(), failures()) < FEW;
        }
    }

    private List<Truth> truths(Optional<double[]> rates) {
        double base = plan.test().baseline();
        double improved = base + plan.test().signedEffect();
        List<Truth> truths = new ArrayList<>();
        truths.add(new Truth("withoutEffect", "without an effect", base, base, 0));
        truths.add(new Truth("smallestEffect", "with the smallest effect", base, improved, design.drift()));
        rates.ifPresent(each -> {
            double control = each[plan.variantIndex(plan.control().name())];
            double own = each[plan.variantIndex(challenger.name())];
            truths.add(new Truth("rates", "under the given rates", control, own, driftUnder(control, own)));
        });
        return truths;
    }

    /** The mirror image of the smallest effect, where harm is tested and rates can be that low or high. */
    private Optional<Truth> mirrored() {
        double base = plan.test().baseline();
        double worse = base - plan.test().signedEffect();
        return plan.test().harm().isPresent() && worse > 0 && worse < 1
                ? Optional.of(new Truth("asMuchWorse", "as much worse", base, worse, driftUnder(base, worse)))
                : Optional.empty();
    }

    private List<Scenario> scenarios(List<Truth> truths) {
        double[] drifts = truths.stream().mapToDouble(Truth::drift).toArray();
        StopChances[] obeyed = path.obeyed(drifts);
        StopChances[] overruled = plan.futility().isPresent() ? path.overruled(drifts) : obeyed;
        List<Scenario> list = new ArrayList<>();
        for (int i = 0; i < drifts.length; i++) {
            Truth truth = truths.get(i);
            list.add(new Scenario(
                    truth.name,
                    truth.words,
                    truth.control,
                    truth.own,
                    truth.drift,
                    population(truth.control, truth.own),
                    obeyed[i],
                    overruled[i]));
        }
        return list;
    }

    private record Truth(String name, String words, double control, double own, double drift) {}

    /**
     * Expected z at the planned end under given rates, towards the benefit: their difference times the root of the planned
     * maximum of information; where trials measure it, times the root of what those trials tell at these rates.
     */
    private double driftUnder(double control, double own) {
        double difference = (own - control) * Math.signum(plan.test().signedEffect());
        double information = design.maximumInformation();
        if (plan.test().measure() == InformationMeasure.TRIALS) {
            information *= variance(design.pooledRate()) / variance(pooled(control, own));
        }
        return difference * Math.sqrt(information);
    }

    /** Trials of all variants until the planned maximum of information is in. */
    private double population(double control, double own) {
        double rate = plan.test().measure() == InformationMeasure.TRIALS ? design.pooledRate() : pooled(control, own);
        return design.maximumInformation() * variance(rate) * (1 / share + 1 / controlShare);
    }

    private double pooled(double control, double own) {
        return (controlShare * control + share * own) / (controlShare + share);
    }

    private static double variance(double rate) {
        return rate * (1 - rate);
    }

    Plan plan() {
        return plan;
    }

    Variant challenger() {
        return challenger;
    }

    PlanDesign design() {
        return design;
    }

    PlannedPath path() {
        return path;
    }

    List<Look> looks() {
        return design.looks();
    }

    /** What the truth may be: no effect, the smallest effect worth finding and, if they were given, other rates. */
    List<Scenario> scenarios() {
        return scenarios;
    }

    Scenario underSmallestEffect() {
        return scenarios.get(1);
    }

    /** A variant that is as much worse as the smallest effect is better; empty where harm is not tested. */
    Optional<Scenario> asMuchWorse() {
        return asMuchWorse;
    }

    /** Planned trials of every variant at the end, in the plan's order: whole ones, rounded up. */
    Map<String, Long> trialsPerVariant() {
        Map<String, Long> trials = new LinkedHashMap<>();
        double[] shares = plan.sharesIn(plan.epochs().size());
        for (Variant variant : plan.variants()) {
            double expected = population() * shares[plan.variantIndex(variant.name())];
            trials.put(variant.name(), design.trials().getOrDefault(variant.name(), (long) Math.ceil(expected)));
        }
        return trials;
    }

    /** Planned trials of all variants at the end, in whole trials of each. */
    long plannedTrials() {
        return trialsPerVariant().values().stream().mapToLong(Long::longValue).sum();
    }

    /** Expected trials of all variants at the end, other challengers included. */
    double population() {
        return underSmallestEffect().population();
    }

    /** Planned trials of all variants by a look. */
    long trials(Look look) {
        return look.information() == 1 ? plannedTrials() : (long) Math.ceil(population() * look.information());
    }

    /** Trials of all variants that have to come in each day for the planned information to be in at the end of the run. */
    double trialsPerDay() {
        return population() / (plan.run().atMost().toMillis() / MILLIS_PER_DAY);
    }

    /** Event time of a look; empty where looks follow the information. */
    Optional<Instant> plannedTime(Look look) {
        if (!(plan.looks() instanceof LookSchedule.Every every)) {
            return Optional.empty();
        }
        Instant time = plan.run().from().plus(every.interval().multipliedBy(look.number()));
        return Optional.of(time.isAfter(plan.run().end()) ? plan.run().end() : time);
    }

    /**
     * The difference of rates, variant minus control, that z at a look stands for; infinite where z is.
     *
     * @param z a z-value of variant minus control
     */
    double difference(double z, Look look) {
        return z / Math.sqrt(look.information() * design.maximumInformation());
    }

    /** What the same test would need if it were read once, at its end. */
    SampleSize singleLook() {
        double drift = design.drift() / Math.sqrt(design.inflation());
        double effect = plan.test().signedEffect();
        return SampleSize.of(
                SampleSize.maximumInformation(drift, effect), plan.test().baseline(), effect, controlShare, share);
    }

    /** What both variants bring to the first look under the smallest effect, by name, the control first. */
    Map<String, FirstCell> firstLook() {
        double trials = population() * looks().get(0).information();
        Scenario effect = underSmallestEffect();
        Map<String, FirstCell> cells = new LinkedHashMap<>();
        cells.put(plan.control().name(), new FirstCell(trials * controlShare, effect.controlRate()));
        cells.put(challenger.name(), new FirstCell(trials * share, effect.rate()));
        return cells;
    }

    /** The levels of this challenger after each number of others has been found, one to all of them. */
    List<PassedOn> passedOn() {
        int own = plan.challengers().indexOf(challenger);
        Set<Integer> found = new HashSet<>();
        List<PassedOn> levels = new ArrayList<>();
        for (int other = 0; other < plan.challengers().size(); other++) {
            if (other != own) {
                found.add(other);
                levels.add(new PassedOn(
                        found.size(),
                        TailLevels.of(plan, own, found, Set.of()).benefit(),
                        TailLevels.of(plan, own, Set.of(), found).harm()));
            }
        }
        return levels;
    }
}
