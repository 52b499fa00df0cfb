package io.tallyward.statistics.proportion;

/**
 * How much it takes to show that a variant is not worse than the control by a margin or more.
 *
 * <p>At information I about the difference, the statistic of {@link NonInferiority} has the expected value {@code distance
 * sqrt(I)}, {@code distance} being how far the true difference lies inside the margin. I is one over the variance at the
 * rates that differ by the margin and are otherwise as close to the expected ones as the likelihood can make them, as
 * Farrington and Manning (1990) have it. Their formula for a single look, {@code (z_alpha sqrt(V0) + z_beta sqrt(V1))^2 /
 * distance^2}, tells the variances with (V1) and without (V0) the true difference apart; here one serves for both, because
 * looks are spaced by it. For a margin of a tenth of the rate (or of the failure rate) and a power of 0.8 the trials differ by less than 0.1
 * percent with equal shares and less than 1.8 percent with one to four.
 *
 * @param margin what has to be ruled out
 * @param baseline expected success rate of the control, in (0, 1)
 * @param trueDifference expected difference, variant minus control, strictly inside the margin; 0 if the variant is
 *     expected to be just as good. {@code baseline + trueDifference} and the rates at the margin lie in (0, 1)
 */
public record MarginPlan(Margin margin, double baseline, double trueDifference) {

    public MarginPlan {
        SampleSize.requireInside("baseline", baseline);
        SampleSize.requireInside("baseline + trueDifference", baseline + trueDifference);
        SampleSize.requireInside("baseline + margin.nullDifference", baseline + margin.nullDifference());
        if (!(margin.distance(trueDifference) > 0)) {
            throw new IllegalArgumentException("trueDifference: " + trueDifference + " (expected: inside the margin, "
                    + (margin.guardsAgainstFall() ? "above " : "below ") + margin.nullDifference() + ")");
        }
    }

    /** A variant that is expected to be just as good as the control. Ranges as above. */
    public static MarginPlan withoutDifference(Margin margin, double baseline) {
        return new MarginPlan(margin, baseline, 0);
    }

    /** How far the true difference lies inside the margin; positive. */
    public double distance() {
        return margin.distance(trueDifference);
    }

    /**
     * The information at which non-inferiority is found with the power of a design.
     *
     * @param drift expected z at the planned maximum of information, from a one-sided design; positive and finite
     */
    public double maximumInformation(double drift) {
        return SampleSize.maximumInformation(drift, distance());
    }

    /**
     * The trials that gather an information about the difference. Other than for a test of no difference, {@code
     * pooledRate} of the answer is that of the expected rates, and not what the variance rests on.
     *
     * @param maximumInformation the information to gather; positive
     * @param controlShare share of the whole population that goes to the control, in (0, 1)
     * @param variantShare share of the whole population that goes to the variant, in (0, 1); together at most 1
     */
    public SampleSize size(double maximumInformation, double controlShare, double variantShare) {
        SampleSize.requireShares(controlShare, variantShare);
        double improved = baseline + trueDifference;
        double variance = ConstrainedRates.variance(
                variantShare * improved,
                variantShare * (1 - improved),
                controlShare * baseline,
                controlShare * (1 - baseline),
                margin.nullDifference());
        double pooled = (controlShare * baseline + variantShare * improved) / (controlShare + variantShare);
        return SampleSize.sized(maximumInformation, pooled, maximumInformation * variance, controlShare, variantShare);
    }
}
