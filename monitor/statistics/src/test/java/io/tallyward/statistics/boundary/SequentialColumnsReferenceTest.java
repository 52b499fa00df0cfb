package io.tallyward.statistics.boundary;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.statistics.ReferenceClaims;
import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.inference.ConditionalPower;
import io.tallyward.statistics.inference.Estimate;
import io.tallyward.statistics.inference.Interval;
import io.tallyward.statistics.inference.RepeatedInterval;
import io.tallyward.statistics.inference.StagewiseInference;
import io.tallyward.statistics.spending.SpendingFunction;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Optional;
import java.util.Set;
import java.util.TreeSet;
import java.util.stream.Collectors;
import org.junit.jupiter.api.Test;

/** Every column of every sequential reference file; tolerances are those of the README beside the files. */
class SequentialColumnsReferenceTest {

    @Test
    void theTableSpeaksOfEveryFile() throws Exception {
        Path folder =
                Path.of(getClass().getResource("/reference/README.md").toURI()).getParent();
        try (var files = Files.list(folder)) {
            Set<String> present = files.map(file -> file.getFileName().toString())
                    .filter(name -> name.endsWith(".csv"))
                    .collect(Collectors.toCollection(TreeSet::new));
            assertEquals(present, new TreeSet<>(ReferenceClaims.files()));
        }
    }

    @Test
    void spendingAndItsBoundaries() {
        follow(ReferenceClaims.of("spending_boundaries.csv"), "information_fraction", "information_fraction");
    }

    @Test
    void spendingOnAnotherClock() {
        follow(ReferenceClaims.of("spending_time.csv"), "information_relative_to_plan", "spending_time");
    }

    private static void follow(ReferenceClaims claims, String informationColumn, String clockColumn) {
        claims.table().by("design_id").values().forEach(rows -> {
            BoundarySequence sequence = new BoundarySequence();
            for (Row row : rows) {
                boolean two = ReferenceFamily.twoSided(row);
                double spent = ReferenceFamily.of(row).spent(ReferenceFamily.tailLevel(row), row.number(clockColumn));
                claims.compare(row, "cumulative_alpha_spent", two ? 2 * spent : spent);
                Look look = sequence.next(row.number(informationColumn), spent, two ? spent : 0);
                claims.compare(row, "z_boundary", look.upper());
            }
        });
        claims.assertComplete();
    }

    @Test
    void constants() {
        ReferenceClaims claims = ReferenceClaims.of("classical_constants.csv");
        claims.table().rows().forEach(row -> {
            int looks = (int) row.count("K");
            double alpha = row.number("alpha_two_sided");
            claims.compare(row, "pocock_constant", ClassicalConstants.POCOCK.constant(looks, alpha));
            claims.compare(row, "obrien_fleming_constant", ClassicalConstants.OBRIEN_FLEMING.constant(looks, alpha));
        });
        claims.assertComplete();
    }

    @Test
    void repeatedTestsAtAFixedLevel() {
        ReferenceClaims claims = ReferenceClaims.of("simulated_oc.csv");
        claims.table().rows().forEach(row -> {
            double critical = Normal.upperQuantile(row.number("nominal_alpha_two_sided") / 2);
            double[] t = new double[(int) row.count("looks")];
            Arrays.setAll(t, k -> (k + 1.0) / t.length);
            double[] upper = new double[t.length];
            Arrays.fill(upper, critical);
            ExitProbabilities exits = ExitProbabilities.of(t, upper, negated(upper), 0);
            double error = exits.totalUpper() + exits.totalLower();
            claims.compare(row, "z_critical", critical);
            claims.compare(row, "type1_error_exact", error);
            if (row.has("published_armitage_1969_recalled")) {
                claims.compare(row, "published_armitage_1969_recalled", error);
            }
        });
        claims.assertComplete();
    }

    @Test
    void heartAttackTrial() {
        ReferenceClaims claims = ReferenceClaims.of("bhat.csv");
        double[] classical = ClassicalConstants.OBRIEN_FLEMING.boundaries(7, 0.05);
        BoundarySequence sequence = new BoundarySequence();
        claims.table().rows().forEach(row -> {
            double bound = classical[(int) row.count("look") - 1];
            double t = row.number("information_fraction_planned");
            double spent = SpendingFunction.obrienFlemingType().spent(0.025, t);
            double spending = sequence.next(t, spent, spent).upper();
            claims.compare(row, "z_boundary_obrien_fleming_classical", bound);
            claims.compare(row, "z_boundary_obf_type_spending", spending);
            if (row.has("observed_logrank_z")) {
                double z = row.number("observed_logrank_z");
                claims.same(row, "crosses_classical", z >= bound);
                claims.same(row, "crosses_spending", z >= spending);
            }
        });
        claims.assertComplete();
    }

    @Test
    void powerAndDrift() {
        ReferenceClaims claims = ReferenceClaims.of("power_and_drift.csv");
        claims.table().rows().forEach(row -> {
            double[] t = row.numbers("information_fractions");
            boolean two = ReferenceFamily.twoSided(row);
            double[] upper = boundaries(row, t);
            double[] lower = two ? negated(upper) : filled(upper.length, Double.NEGATIVE_INFINITY);
            claims.compare(row, "z_boundaries", upper);
            ExitProbabilities exits = ExitProbabilities.of(t, upper, lower, row.number("theta"));
            claims.compare(row, "exit_upper_by_look", exits.upper());
            claims.compare(row, "exit_lower_by_look", exits.lower());
            claims.compare(row, "prob_upper", exits.totalUpper());
            claims.compare(row, "prob_lower", exits.totalLower());
            claims.compare(row, "prob_reject", exits.totalUpper() + exits.totalLower());
            claims.compare(row, "expected_fraction_at_theta", exits.expectedInformation());
            double none = ExitProbabilities.of(t, upper, lower, 0).expectedInformation();
            claims.compare(row, "expected_fraction_null", none);
            double drift = row.number("theta");
            if (row.has("target_power")) {
                double power = row.number("target_power");
                double fixed = Normal.upperQuantile(ReferenceFamily.tailLevel(row)) + Normal.quantile(power);
                drift = DriftForPower.of(t, upper, lower, power);
                claims.compare(row, "theta_fixed_sample", fixed);
                claims.compare(row, "inflation_factor", drift / fixed * (drift / fixed));
            }
            claims.compare(row, "theta", drift);
        });
        claims.assertComplete();
    }

    private static double[] boundaries(Row row, double[] t) {
        String family = row.text("family");
        if (family.equals("CPOCOCK")) {
            return ClassicalConstants.POCOCK.boundaries(t.length, row.number("alpha"));
        }
        if (family.equals("COBF")) {
            return ClassicalConstants.OBRIEN_FLEMING.boundaries(t.length, row.number("alpha"));
        }
        BoundarySequence sequence = new BoundarySequence();
        double[] upper = new double[t.length];
        for (int k = 0; k < t.length; k++) {
            double spent = ReferenceFamily.of(row).spent(ReferenceFamily.tailLevel(row), t[k]);
            upper[k] = sequence.next(t[k], spent, ReferenceFamily.twoSided(row) ? spent : 0)
                    .upper();
        }
        return upper;
    }

    @Test
    void futility() {
        ReferenceClaims claims = ReferenceClaims.of("futility.csv");
        claims.table().by("design_id").values().forEach(rows -> compareFutility(claims, rows));
        claims.assertComplete();
    }

    private static void compareFutility(ReferenceClaims claims, List<Row> rows) {
        Row first = rows.get(0);
        double alpha = first.number("alpha_one_sided");
        double beta = first.number("beta");
        SpendingFunction efficacy = ReferenceFamily.of(first.text("efficacy_family"), first, "efficacy_parameter");
        SpendingFunction futility = ReferenceFamily.of(first.text("futility_family"), first, "futility_parameter");
        double[] t = rows.stream()
                .mapToDouble(row -> row.number("information_fraction"))
                .toArray();
        Design design = Design.of(new DesignRequest(alpha, false, efficacy, 1 - beta, t, Optional.of(futility)));
        double[] upper = design.looks().stream()
                .mapToDouble(look -> look.boundaries().upper())
                .toArray();
        double[] lower =
                design.looks().stream().mapToDouble(DesignLook::futility).toArray();
        ExitProbabilities none = ExitProbabilities.of(t, upper, lower, 0);
        ExitProbabilities planned = ExitProbabilities.of(t, upper, lower, design.drift());
        for (int k = 0; k < t.length; k++) {
            Row row = rows.get(k);
            claims.compare(row, "cumulative_alpha_spent", efficacy.spent(alpha, t[k]));
            claims.compare(row, "z_efficacy", upper[k]);
            claims.compare(row, "cumulative_beta_spent", futility.spent(beta, t[k]));
            claims.compare(row, "z_futility", lower[k]);
            claims.compare(row, "theta", design.drift());
            claims.compare(row, "inflation_factor", design.inflation());
            claims.compare(row, "power", planned.totalUpper());
            claims.compare(row, "type1_if_futility_obeyed", none.totalUpper());
            claims.compare(row, "expected_fraction_null", design.expectedFractionWithoutEffect());
            claims.compare(row, "expected_fraction_at_theta", design.expectedFraction());
            claims.compare(row, "exit_efficacy_null", none.upper()[k]);
            claims.compare(row, "exit_futility_null", none.lower()[k]);
            claims.compare(row, "exit_efficacy_theta", planned.upper()[k]);
            claims.compare(row, "exit_futility_theta", planned.lower()[k]);
        }
    }

    @Test
    void conditionalPower() {
        ReferenceClaims claims = ReferenceClaims.of("conditional_power.csv");
        claims.table().rows().forEach(row -> {
            double[] upper = row.numbers("remaining_z_boundaries");
            ConditionalPower power = ConditionalPower.of(
                    row.number("interim_fraction"),
                    row.number("interim_z"),
                    row.numbers("remaining_fractions"),
                    upper,
                    filled(upper.length, Double.NEGATIVE_INFINITY));
            String assumption = row.text("drift_assumption");
            if (row.has("theta_used")) {
                double used = switch (assumption) {
                    case "null" -> 0;
                    case "trend" -> power.trend();
                    default -> row.number("theta_used");
                };
                claims.compare(row, "theta_used", used);
                claims.compare(row, "value", power.under(used));
            } else {
                assertEquals("posterior", assumption);
                claims.compare(row, "value", power.predictive());
            }
        });
        claims.assertComplete();
    }

    @Test
    void afterStopping() {
        ReferenceClaims claims = ReferenceClaims.of("after_stopping.csv");
        List<String> mislabelled = new ArrayList<>();
        claims.table().rows().forEach(row -> {
            List<Look> looks = looks(row);
            double z = row.number("observed_z");
            StagewiseInference stop = StagewiseInference.of(looks, z);
            Look last = looks.get(looks.size() - 1);
            String crossed = z >= last.upper() ? "upper" : z <= last.lower() ? "lower" : "none";
            if (!crossed.equals(row.text("boundary_crossed"))) {
                mislabelled.add(row.text("case_id"));
            }
            claims.compare(row, "p_upper", stop.pUpper());
            claims.compare(row, "p_lower", stop.pLower());
            claims.compare(row, "p_reported", stop.pReported(ReferenceFamily.twoSided(row)));
            claims.compare(row, "naive_theta", stop.naiveDrift());
            Estimate estimate = stop.estimate(row.number("ci_level"));
            claims.compare(row, "median_unbiased_theta", estimate.value());
            claims.compare(row, "ci_lower", estimate.interval().lower());
            claims.compare(row, "ci_upper", estimate.interval().upper());
            Interval repeated = RepeatedInterval.at(last, z, row.number("rci_level"));
            claims.compare(row, "rci_lower", repeated.lower());
            claims.compare(row, "rci_upper", repeated.upper());
        });
        // 2.5 is beyond 1.96, and the file's own numbers say so
        assertEquals(List.of("e070_eq1_two_0.05_OBF"), mislabelled);
        claims.assertComplete();
    }

    private static List<Look> looks(Row row) {
        double[] t = row.numbers("information_fractions");
        double[] upper = row.numbers("z_boundaries");
        boolean two = ReferenceFamily.twoSided(row);
        List<Look> looks = new ArrayList<>();
        for (int k = 0; k < row.count("stop_look"); k++) {
            looks.add(new Look(k + 1, t[k], 0, 0, upper[k], two ? -upper[k] : Double.NEGATIVE_INFINITY));
        }
        return looks;
    }

    private static double[] negated(double[] values) {
        return Arrays.stream(values).map(x -> -x).toArray();
    }

    private static double[] filled(int length, double value) {
        double[] filled = new double[length];
        Arrays.fill(filled, value);
        return filled;
    }
}
