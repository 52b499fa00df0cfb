package io.tallyward.statistics;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.statistics.ReferenceTable.Row;
import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.multiplicity.AdjustedProbability;
import io.tallyward.statistics.multiplicity.AlphaGraph;
import io.tallyward.statistics.multiplicity.Dunnett;
import io.tallyward.statistics.proportion.CommonOddsRatio;
import io.tallyward.statistics.proportion.CommonRateDifference;
import io.tallyward.statistics.proportion.CommonRateRatio;
import io.tallyward.statistics.proportion.Interval;
import io.tallyward.statistics.proportion.MantelHaenszelTest;
import io.tallyward.statistics.proportion.RateDifference;
import io.tallyward.statistics.proportion.RateRatio;
import io.tallyward.statistics.proportion.ScoreInterval;
import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import io.tallyward.statistics.proportion.ZStatistic;
import io.tallyward.statistics.ratio.RatioComparison;
import io.tallyward.statistics.ratio.RatioEstimate;
import io.tallyward.statistics.ratio.UnitSums;
import io.tallyward.statistics.split.PearsonSplit;
import io.tallyward.statistics.split.SequentialEvidence;
import io.tallyward.statistics.split.SequentialSplitTest;
import io.tallyward.statistics.split.WorstSegment;
import java.util.Arrays;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalDouble;
import java.util.Set;
import java.util.SortedSet;
import java.util.TreeSet;
import org.junit.jupiter.api.Test;

/** Every column of every reference file outside the sequential ones; tolerances are those of the README beside the files. */
class ReferenceColumnsTest {

    @Test
    void normalLaw() {
        ReferenceClaims claims = ReferenceClaims.of("normal.csv");
        claims.table().rows().forEach(row -> {
            double x = row.number("x");
            claims.compare(row, "log_survival", Normal.logSurvival(x));
            if (row.has("density")) {
                claims.compare(row, "density", Normal.density(x));
                claims.compare(row, "cdf", Normal.cdf(x));
                claims.compare(row, "survival", Normal.survival(x));
            }
        });
        claims.assertComplete();
        ReferenceClaims quantiles = ReferenceClaims.of("normal_quantiles.csv");
        quantiles
                .table()
                .rows()
                .forEach(row -> quantiles.compare(row, "upper_quantile", Normal.upperQuantile(row.number("p"))));
        quantiles.assertComplete();
    }

    @Test
    void twoProportions() {
        ReferenceClaims claims = ReferenceClaims.of("two_proportions.csv");
        claims.table().rows().forEach(row -> {
            Stratum counts = stratum(row);
            Optional<ZStatistic> pooled = ZStatistic.pooled(counts);
            claims.compare(row, "z_pooled", number(pooled.map(ZStatistic::z)));
            claims.compare(row, "p_one_sided_greater", number(pooled.map(ZStatistic::pGreater)));
            claims.compare(row, "p_one_sided_less", number(pooled.map(ZStatistic::pLess)));
            claims.compare(row, "p_two_sided", number(pooled.map(ZStatistic::pTwoSided)));
            claims.compare(row, "log10_p_two_sided", number(pooled.map(ZStatistic::log10PTwoSided)));
            compareIntervals(claims, row, counts);
            compareRatio(claims, row, counts);
        });
        claims.assertComplete();
    }

    private static void compareIntervals(ReferenceClaims claims, Row row, Stratum counts) {
        double confidence = row.number("confidence");
        RateDifference difference = RateDifference.of(counts).orElseThrow();
        claims.compare(row, "risk_difference", difference.value());
        claims.compare(row, "se_unpooled", difference.standardError());
        claims.compare(row, "z_unpooled", number(ZStatistic.unpooled(counts).map(ZStatistic::z)));
        compareEnds(claims, row, "wald", Optional.of(difference.wald(confidence)));
        compareEnds(
                claims, row, "wilson_treatment", ScoreInterval.wilson(counts.successes(), counts.trials(), confidence));
        compareEnds(
                claims,
                row,
                "wilson_control",
                ScoreInterval.wilson(counts.controlSuccesses(), counts.controlTrials(), confidence));
        compareEnds(claims, row, "newcombe", ScoreInterval.newcombe(counts, confidence));
        compareEnds(claims, row, "mn", ScoreInterval.miettinenNurminen(counts, confidence));
    }

    private static void compareRatio(ReferenceClaims claims, Row row, Stratum counts) {
        Optional<RateRatio> ratio = RateRatio.of(counts);
        claims.compare(row, "risk_ratio", number(ratio.map(RateRatio::value)));
        claims.compare(
                row, "se_log_risk_ratio", ratio.map(RateRatio::logStandardError).orElse(OptionalDouble.empty()));
        compareEnds(claims, row, "risk_ratio", ratio.flatMap(found -> found.interval(row.number("confidence"))));
    }

    @Test
    void strata() {
        ReferenceClaims claims = ReferenceClaims.of("stratified.csv");
        ReferenceClaims counts = ReferenceClaims.of("stratified_counts.csv");
        Map<String, List<Row>> cases = counts.table().by("case_id");
        claims.table().rows().forEach(row -> {
            List<Stratum> strata = cases.get(row.text("case_id")).stream()
                    .map(ReferenceColumnsTest::stratum)
                    .toList();
            claims.compare(row, "strata", strata.size());
            Stratum crude = strata.stream()
                    .reduce((a, b) -> new Stratum(
                            a.successes() + b.successes(),
                            a.trials() + b.trials(),
                            a.controlSuccesses() + b.controlSuccesses(),
                            a.controlTrials() + b.controlTrials()))
                    .orElseThrow();
            claims.compare(
                    row,
                    "crude_risk_difference",
                    RateDifference.of(crude).orElseThrow().value());
            claims.compare(
                    row,
                    "crude_z_pooled",
                    ZStatistic.pooled(crude).orElseThrow().z());
            compareTests(claims, row, strata);
            compareCommonEffects(claims, row, strata);
        });
        claims.assertComplete();
        counts.assertComplete();
    }

    private static void compareTests(ReferenceClaims claims, Row row, List<Stratum> strata) {
        MantelHaenszelTest test = MantelHaenszelTest.of(strata).orElseThrow();
        claims.compare(row, "mh_z", test.z());
        claims.compare(row, "mh_chi_square", test.chiSquare());
        claims.compare(row, "mh_p", test.statistic().pTwoSided());
        claims.compare(row, "mh_chi_square_corrected", test.correctedChiSquare());
        claims.compare(row, "mh_p_corrected", test.correctedPTwoSided());
        double cochran = StratifiedComparison.of(strata).orElseThrow().z();
        claims.compare(row, "cochran_z", cochran);
        claims.compare(row, "cochran_chi_square", cochran * cochran);
    }

    private static void compareCommonEffects(ReferenceClaims claims, Row row, List<Stratum> strata) {
        CommonOddsRatio odds = CommonOddsRatio.of(strata).orElseThrow();
        claims.compare(row, "mh_odds_ratio", odds.value());
        claims.compare(row, "var_log_or_rbg", odds.logVariance());
        compareEnds(claims, row, "or", odds.interval(0.95));
        CommonRateDifference difference = CommonRateDifference.of(strata).orElseThrow();
        claims.compare(row, "mh_risk_difference", difference.value());
        claims.compare(row, "var_rd_sato", difference.satoVariance());
        compareEnds(claims, row, "rd_sato", Optional.of(difference.satoInterval(0.95)));
        claims.compare(row, "var_rd_greenland_robins", difference.greenlandRobinsVariance());
        CommonRateRatio ratio = CommonRateRatio.of(strata).orElseThrow();
        claims.compare(row, "mh_risk_ratio", ratio.value());
        claims.compare(row, "var_log_rr", ratio.logVariance());
    }

    @Test
    void ratiosOfSums() {
        ReferenceClaims claims = ReferenceClaims.of("ratio_metric.csv");
        ReferenceClaims users = ReferenceClaims.of("ratio_metric_users.csv");
        Map<String, List<Row>> cases = users.table().by("case_id");
        claims.table().rows().forEach(row -> {
            UnitSums treatment = sums(cases.get(row.text("case_id")), "treatment");
            UnitSums control = sums(cases.get(row.text("case_id")), "control");
            compareArm(claims, row, "treatment", treatment);
            compareArm(claims, row, "control", control);
            RatioComparison found = RatioComparison.of(treatment, control).orElseThrow();
            ZStatistic z = found.z().orElseThrow();
            claims.compare(row, "difference", found.difference());
            claims.compare(row, "se_difference", found.standardError());
            claims.compare(row, "z", z.z());
            claims.compare(row, "p_two_sided", z.pTwoSided());
            claims.compare(row, "log_ratio", found.logRatio().orElseThrow().value());
            claims.compare(row, "se_log_ratio", found.logRatio().orElseThrow().standardError());
            compareContrasts(claims, row, treatment, control);
        });
        claims.assertComplete();
        users.assertComplete();
    }

    private static void compareArm(ReferenceClaims claims, Row row, String arm, UnitSums sums) {
        RatioEstimate estimate = RatioEstimate.of(sums).orElseThrow();
        claims.compare(row, "users_" + arm, sums.units());
        claims.compare(row, "clicks_" + arm, sums.numerator().doubleValue());
        claims.compare(row, "views_" + arm, sums.denominator().doubleValue());
        claims.compare(row, "ratio_" + arm, estimate.ratio());
        claims.compare(row, "var_ratio_" + arm, estimate.variance());
    }

    /** What other ways of counting would say: divisor n, views as if they were independent, and by how much that is off. */
    private static void compareContrasts(ReferenceClaims claims, Row row, UnitSums treatment, UnitSums control) {
        RatioEstimate own = RatioEstimate.of(treatment).orElseThrow();
        RatioEstimate other = RatioEstimate.of(control).orElseThrow();
        double withDivisorN = own.variance() * (treatment.units() - 1) / treatment.units()
                + other.variance() * (control.units() - 1) / control.units();
        claims.compare(row, "se_difference_divisor_n", Math.sqrt(withDivisorN));
        Stratum views = new Stratum(
                treatment.numerator().longValueExact(),
                treatment.denominator().longValueExact(),
                control.numerator().longValueExact(),
                control.denominator().longValueExact());
        claims.compare(
                row,
                "z_naive_per_view_pooled",
                ZStatistic.pooled(views).orElseThrow().z());
        double independent = own.ratio() * (1 - own.ratio()) / views.trials();
        claims.compare(row, "design_effect_treatment", own.variance() / independent);
    }

    @Test
    void severalVariants() {
        ReferenceClaims claims = ReferenceClaims.of("multi_arm.csv");
        claims.table().rows().forEach(row -> {
            double[] allocation = row.numbers("allocation_control_first");
            double alpha = row.number("alpha");
            int arms = (int) row.count("treatment_arms");
            boolean two = row.text("side").equals("two");
            Dunnett dunnett = Dunnett.of(allocation[0], Arrays.copyOfRange(allocation, 1, allocation.length));
            assertEquals(arms, allocation.length - 1);
            claims.compare(
                    row,
                    "dunnett_critical",
                    two ? dunnett.twoSidedCriticalValue(alpha) : dunnett.oneSidedCriticalValue(alpha));
            double bonferroni =
                    AlphaGraph.bonferroni(arms).levels(alpha, Set.of()).get(arms - 1);
            claims.compare(row, "bonferroni_critical", Normal.upperQuantile(two ? bonferroni / 2 : bonferroni));
            double sidak = -Math.expm1(Math.log1p(-alpha) / arms);
            claims.compare(row, "sidak_critical", Normal.upperQuantile(two ? sidak / 2 : sidak));
        });
        claims.assertComplete();
        ReferenceClaims adjusted = ReferenceClaims.of("multi_arm_holm.csv");
        adjusted.table().by("case_id").values().forEach(rows -> compareAdjusted(adjusted, rows));
        adjusted.assertComplete();
    }

    private static void compareAdjusted(ReferenceClaims claims, List<Row> rows) {
        double[] p = rows.stream().mapToDouble(row -> row.number("p_value")).toArray();
        double[] bonferroni = AdjustedProbability.BONFERRONI.of(p);
        double[] holm = AdjustedProbability.HOLM.of(p);
        SortedSet<Integer> rejected = new TreeSet<>(AlphaGraph.holm(p.length).rejections(0.05, p));
        for (int i = 0; i < p.length; i++) {
            claims.compare(rows.get(i), "bonferroni_adjusted", bonferroni[i]);
            claims.compare(rows.get(i), "holm_adjusted", holm[i]);
            claims.same(rows.get(i), "holm_reject_at_0.05", rejected.contains(i));
        }
    }

    @Test
    void splitsReadOnce() {
        ReferenceClaims claims = ReferenceClaims.of("srm_chisq.csv");
        claims.table().rows().forEach(row -> {
            double[] shares = row.numbers("ratio");
            long[] counts = row.counts("observed");
            PearsonSplit split = PearsonSplit.of(shares, counts);
            claims.compare(row, "df", split.degreesOfFreedom());
            claims.compare(row, "chi_square", split.chiSquare());
            claims.compare(row, "p_value", split.pValue());
            claims.compare(row, "log10_p_value", split.log10PValue());
            double least = Arrays.stream(shares).min().orElseThrow()
                    / Arrays.stream(shares).sum()
                    * Arrays.stream(counts).asDoubleStream().sum();
            claims.compare(row, "min_expected", least);
            boolean judged = WorstSegment.of(shares, Map.of("all", counts)).isPresent();
            assertEquals(least >= WorstSegment.LEAST_EXPECTED, judged, row.text("case_id"));
        });
        claims.assertComplete();
    }

    @Test
    void splitsReadAgainAndAgain() {
        ReferenceClaims claims = ReferenceClaims.of("srm_sequential.csv");
        claims.table().by("sequence_id").values().forEach(rows -> {
            SequentialEvidence evidence = SequentialEvidence.NONE;
            for (Row row : rows) {
                double found = SequentialSplitTest.logBayesFactor(
                        row.number("concentration"), row.numbers("ratio"), row.counts("cumulative_counts"));
                evidence = evidence.after(found);
                claims.compare(row, "log_bayes_factor", found);
                claims.compare(row, "sequential_p_value", evidence.pValue());
                claims.compare(row, "log10_sequential_p_value", evidence.log10PValue());
            }
        });
        claims.assertComplete();
    }

    private static void compareEnds(ReferenceClaims claims, Row row, String name, Optional<Interval> found) {
        claims.compare(row, name + "_lower", number(found.map(Interval::lower)));
        claims.compare(row, name + "_upper", number(found.map(Interval::upper)));
    }

    private static OptionalDouble number(Optional<Double> value) {
        return value.map(OptionalDouble::of).orElse(OptionalDouble.empty());
    }

    private static UnitSums sums(List<Row> users, String arm) {
        return users.stream()
                .filter(user -> user.text("arm").equals(arm))
                .map(user -> UnitSums.ofUnit(user.count("views"), user.count("clicks")))
                .reduce(UnitSums.NONE, UnitSums::plus);
    }

    private static Stratum stratum(Row row) {
        return new Stratum(
                row.count("x_treatment"), row.count("n_treatment"), row.count("x_control"), row.count("n_control"));
    }
}
