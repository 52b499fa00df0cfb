package io.tallyward.statistics.boundary;

import io.tallyward.statistics.distribution.Normal;
import io.tallyward.statistics.spending.SpendingFunction;
import java.util.ArrayList;
import java.util.List;

/**
 * A planned design: its looks and the drift it finds with the power asked for.
 *
 * @param request what was asked for
 * @param looks the planned looks
 * @param drift expected z at information 1 under which the upper boundary is crossed first with the power asked for;
 *     crossing the lower boundary first counts as a failure. With futility bounds: the drift for which the last futility
 *     bound meets the last upper boundary, so that the power holds with futility obeyed
 * @param fixedSampleDrift the drift that a single look at information 1 would need
 * @param expectedFractionWithoutEffect expected information at the end under drift 0, futility obeyed
 * @param expectedFraction expected information at the end under {@code drift}, futility obeyed
 */
public record Design(
        DesignRequest request,
        List<DesignLook> looks,
        double drift,
        double fixedSampleDrift,
        double expectedFractionWithoutEffect,
        double expectedFraction) {

    public Design {
        looks = List.copyOf(looks);
        requirePositive("drift", drift);
        requirePositive("fixedSampleDrift", fixedSampleDrift);
        requirePositive("expectedFractionWithoutEffect", expectedFractionWithoutEffect);
        requirePositive("expectedFraction", expectedFraction);
    }

    /**
     * Plans a design. A millisecond or a few for 20 looks, some tens for 168.
     *
     * @throws IllegalArgumentException if the fractions do not ascend or the power is out of reach
     */
    public static Design of(DesignRequest request) {
        List<Look> boundaries = boundaries(request);
        double fixed = Normal.upperQuantile(request.tailLevel()) + Normal.quantile(request.power());
        if (request.futilitySpending().isPresent()) {
            return withFutility(request, boundaries, fixed);
        }
        double[] information = request.fractions();
        double[] upper = boundaries.stream().mapToDouble(Look::upper).toArray();
        double[] lower = boundaries.stream().mapToDouble(Look::lower).toArray();
        ExitProfile profile = ExitProfile.of(information, upper, lower, 0, DriftForPower.greatest(information));
        double drift =
                DriftForPower.root(theta -> profile.upward(theta).probability(), request.power(), fixed, information);
        List<DesignLook> looks = boundaries.stream()
                .map(look -> new DesignLook(look, Double.NEGATIVE_INFINITY))
                .toList();
        return new Design(
                request,
                looks,
                drift,
                fixed,
                profile.at(0).expectedInformation(),
                profile.at(drift).expectedInformation());
    }

    /** How much more information the design needs at most than a single look would: {@code (drift / fixed)^2}. */
    public double inflation() {
        double ratio = drift / fixedSampleDrift;
        return ratio * ratio;
    }

    private static List<Look> boundaries(DesignRequest request) {
        BoundarySequence sequence = new BoundarySequence();
        List<Look> looks = new ArrayList<>();
        for (double fraction : request.fractions()) {
            double spent = request.spending().spent(request.tailLevel(), fraction);
            looks.add(sequence.next(fraction, spent, request.twoSided() ? spent : 0));
        }
        return looks;
    }

    private static Design withFutility(DesignRequest request, List<Look> boundaries, double fixed) {
        double drift = DriftForPower.root(
                theta -> follow(request, boundaries, theta, new double[boundaries.size()]),
                request.power(),
                fixed,
                request.fractions());
        double[] futility = new double[boundaries.size()];
        follow(request, boundaries, drift, futility);
        List<DesignLook> looks = new ArrayList<>();
        for (int k = 0; k < futility.length; k++) {
            looks.add(new DesignLook(boundaries.get(k), futility[k]));
        }
        return new Design(
                request,
                looks,
                drift,
                fixed,
                exits(request, boundaries, futility, 0).expectedInformation(),
                exits(request, boundaries, futility, drift).expectedInformation());
    }

    /** Fills in the futility bounds under a drift, the last one set to the upper boundary, and gives the power. */
    private static double follow(DesignRequest request, List<Look> boundaries, double drift, double[] bounds) {
        SpendingFunction spending = request.futilitySpending().orElseThrow();
        FutilitySequence sequence = new FutilitySequence(drift);
        for (int k = 0; k < bounds.length; k++) {
            Look look = boundaries.get(k);
            double spent = spending.spent(1 - request.power(), look.information());
            bounds[k] = sequence.next(look.information(), look.upper(), spent);
        }
        bounds[bounds.length - 1] = boundaries.get(bounds.length - 1).upper();
        return sequence.power();
    }

    private static ExitProbabilities exits(
            DesignRequest request, List<Look> boundaries, double[] futility, double drift) {
        double[] upper = boundaries.stream().mapToDouble(Look::upper).toArray();
        return ExitProbabilities.of(request.fractions(), upper, futility, drift);
    }

    private static void requirePositive(String name, double value) {
        if (!(value > 0 && value < Double.POSITIVE_INFINITY)) {
            throw new IllegalArgumentException(name + ": " + value + " (expected: positive and finite)");
        }
    }
}
