package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.TestPlan.Better;
import io.tallyward.service.command.PlannedComparison.Scenario;
import io.tallyward.statistics.boundary.Look;
import io.tallyward.statistics.distribution.Normal;
import java.time.Instant;
import java.time.ZoneOffset;
import java.time.format.DateTimeFormatter;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;

/** The tables of one comparison, one row per look. */
final class BoundariesTables {

    static final String NONE = "-";

    /** With more looks than this, some are left out... */
    private static final int MOST_ROWS = 24;

    /** ... so that about this many are left. */
    private static final int ROWS = 20;

    /** Smaller probabilities than this would be rounded to nothing. */
    private static final double LEAST_CHANCE = 5e-5;

    private static final DateTimeFormatter MINUTE =
            DateTimeFormatter.ofPattern("yyyy-MM-dd HH:mm", Locale.ROOT).withZone(ZoneOffset.UTC);

    private final Plan plan;
    private final boolean allLooks;
    private final boolean harm;
    private final boolean futility;
    private final int places;

    BoundariesTables(Plan plan, boolean allLooks) {
        this.plan = plan;
        this.allLooks = allLooks;
        harm = plan.test().harm().isPresent();
        futility = plan.futility().isPresent();
        places = Math.max(2, 2 - (int) Math.floor(Math.log10(100 * plan.test().smallestEffect())));
    }

    /** Says which looks the tables have, where they leave some out. */
    String selection(PlannedComparison comparison) {
        int step = step(comparison);
        return step == 1
                ? ""
                : " (the first, the last and one in " + step + " of "
                        + comparison.looks().size() + " looks; --all-looks or --json has all)";
    }

    private int step(PlannedComparison comparison) {
        int looks = comparison.looks().size();
        return allLooks || looks <= MOST_ROWS ? 1 : (looks + ROWS - 1) / ROWS;
    }

    private List<Look> selected(PlannedComparison comparison) {
        int step = step(comparison);
        int last = comparison.looks().size();
        return comparison.looks().stream()
                .filter(look -> look.number() == 1 || look.number() == last || look.number() % step == 0)
                .toList();
    }

    /** Moments and boundaries. */
    Table boundaries(PlannedComparison comparison) {
        boolean timed = comparison.plannedTime(comparison.looks().get(0)).isPresent();
        Cells header = new Cells("look").add(timed, "until, UTC").add("information", "trials", "alpha spent");
        Table table = new Table(
                header.add("upper z", "lower z").add(futility, "futility z").all());
        boolean higher = plan.test().better() == Better.HIGHER;
        String down = harm ? "harm" : "";
        table.group("", timed ? 4 : 3).group(higher ? "benefit" : down, 1).group(higher ? down : "benefit", 1);
        for (Look look : selected(comparison)) {
            Cells row = new Cells(String.valueOf(look.number()));
            comparison.plannedTime(look).ifPresent(time -> row.add(minute(time)));
            row.add(
                    decimals(look.information(), 4),
                    String.format(Locale.ROOT, "%,d", comparison.trials(look)),
                    spent(look.upperSpent() + look.lowerSpent()),
                    boundary(look.upper()),
                    boundary(look.lower()));
            row.add(futility, boundary(comparison.path().futility(look.number() - 1)));
            table.row(row.all());
        }
        return table;
    }

    /** What a boundary means to somebody who reads p-values or differences. */
    Table readings(PlannedComparison comparison) {
        boolean apart = BoundariesText.unequal(plan);
        Table table = new Table(new Cells("look")
                .add(apart, "benefit", "harm")
                .add("benefit")
                .add(harm, "harm")
                .add("benefit")
                .add(harm, "harm")
                .add(futility, "futility")
                .all());
        if (apart) {
            table.group("alpha spent on", 2);
        }
        table.group("one-look p", harm ? 2 : 1);
        table.group("difference in points", 1 + (harm ? 1 : 0) + (futility ? 1 : 0));
        boolean higher = plan.test().better() == Better.HIGHER;
        PlannedPath path = comparison.path();
        for (Look look : selected(comparison)) {
            int index = look.number() - 1;
            double up = higher ? look.upperSpent() : look.lowerSpent();
            double down = higher ? look.lowerSpent() : look.upperSpent();
            table.row(new Cells(String.valueOf(look.number()))
                    .add(apart, spent(up), spent(down))
                    .add(pValue(path.benefit(index)))
                    .add(harm, pValue(path.harm(index)))
                    .add(points(comparison.difference(path.benefit(index), look)))
                    .add(harm, points(comparison.difference(path.harm(index), look)))
                    .add(futility, points(comparison.difference(path.futility(index), look)))
                    .all());
        }
        return table;
    }

    /** Cumulative probabilities of stopping. */
    Table chances(PlannedComparison comparison) {
        Cells header = new Cells("look");
        for (int i = 0; i < comparison.scenarios().size(); i++) {
            header.add("benefit").add(harm, "harm").add(futility, "futility");
        }
        Table table = new Table(header.all());
        int columns = 1 + (harm ? 1 : 0) + (futility ? 1 : 0);
        comparison.scenarios().forEach(scenario -> table.group(scenario.words(), columns));
        for (Look look : selected(comparison)) {
            int index = look.number() - 1;
            Cells row = new Cells(String.valueOf(look.number()));
            for (Scenario scenario : comparison.scenarios()) {
                row.add(chance(scenario.obeyed().benefit()[index]))
                        .add(harm, chance(scenario.obeyed().harm()[index]))
                        .add(futility, chance(scenario.obeyed().futility()[index]));
            }
            table.row(row.all());
        }
        return table;
    }

    /** Where paths end, futility obeyed and overruled. */
    Table endings(PlannedComparison comparison) {
        Table table = new Table(new Cells("truth")
                .add("benefit")
                .add(harm, "harm")
                .add(futility, "futility")
                .add("no stop", "looks", "information", "trials")
                .all());
        table.group("probability of", 2 + (harm ? 1 : 0) + (futility ? 1 : 0)).group("expected", 3);
        List<Scenario> scenarios = new ArrayList<>(comparison.scenarios());
        comparison.asMuchWorse().ifPresent(worse -> scenarios.add(2, worse));
        for (Scenario scenario : scenarios) {
            table.row(ending(scenario.words(), scenario, scenario.obeyed()));
            if (futility) {
                table.row(ending("  futility overruled", scenario, scenario.overruled()));
            }
        }
        return table;
    }

    private String[] ending(String words, Scenario scenario, StopChances chances) {
        int last = chances.benefit().length - 1;
        double down = chances.harm()[last];
        double futile = chances.futility()[last];
        return new Cells(words)
                .add(chance(chances.power()))
                .add(harm, chance(down))
                .add(futility, chance(futile))
                .add(
                        chance(Math.max(0, 1 - chances.power() - down - futile)),
                        decimals(chances.expectedLooks(), 1),
                        decimals(chances.expectedInformation(), 4),
                        String.format(Locale.ROOT, "%,.0f", scenario.trials(chances)))
                .all();
    }

    private static String minute(Instant time) {
        return MINUTE.format(time);
    }

    private static String boundary(double z) {
        return Double.isFinite(z) ? decimals(z, 4) : NONE;
    }

    /** Error spent; what is too small for six places keeps two digits. */
    private static String spent(double probability) {
        return probability == 0 || probability >= 1e-4
                ? decimals(probability, 6)
                : String.format(Locale.ROOT, "%.1e", probability);
    }

    /** A probability; 0.0000 stands for none at all. */
    private static String chance(double probability) {
        return probability > 0 && probability < LEAST_CHANCE ? "<0.0001" : decimals(probability, 4);
    }

    /** The one-sided p-value of a z at its boundary. */
    private static String pValue(double z) {
        if (!Double.isFinite(z)) {
            return NONE;
        }
        double p = Normal.survival(Math.abs(z));
        return p < 1e-4 ? String.format(Locale.ROOT, "%.1e", p) : decimals(p, 5);
    }

    private String points(double difference) {
        return Double.isFinite(difference) ? String.format(Locale.ROOT, "%+." + places + "f", 100 * difference) : NONE;
    }

    private static String decimals(double value, int places) {
        return String.format(Locale.ROOT, "%." + places + "f", value);
    }

    /** The cells of a row, some only where a plan has what they are about. */
    private static final class Cells {

        private final List<String> cells = new ArrayList<>();

        Cells(String first) {
            cells.add(first);
        }

        Cells add(String... more) {
            cells.addAll(List.of(more));
            return this;
        }

        Cells add(boolean wanted, String... more) {
            return wanted ? add(more) : this;
        }

        String[] all() {
            return cells.toArray(String[]::new);
        }
    }
}
