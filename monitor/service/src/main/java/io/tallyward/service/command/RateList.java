package io.tallyward.service.command;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.config.document.Suggestion;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.List;
import java.util.Optional;

/** Reads true success rates as in {@code plain=0.12,wide=0.126}. */
final class RateList {

    private static final String OPTION = "--rates";
    private static final ScalarType<Double> RATE = ScalarType.numberBetween(0, 1);

    private final Plan plan;
    private final double[] rates;
    private final boolean[] named;
    private final List<Problem> problems = new ArrayList<>();

    private RateList(Plan plan) {
        this.plan = plan;
        rates = new double[plan.variants().size()];
        named = new boolean[rates.length];
        Arrays.fill(rates, plan.test().baseline());
    }

    /**
     * The rate of every variant, in the plan's order; the baseline where the text names none.
     *
     * @throws BadInputException with everything that is wrong with the text
     */
    static double[] parse(String text, Plan plan) throws BadInputException {
        RateList list = new RateList(plan);
        if (!text.isBlank()) {
            for (String entry : text.split(",", -1)) {
                list.take(entry.strip());
            }
        }
        if (!list.problems.isEmpty()) {
            throw new BadInputException(list.problems);
        }
        return list.rates;
    }

    private void take(String entry) {
        int equals = entry.indexOf('=');
        if (equals < 1) {
            refuse(entry.isEmpty() ? "an empty entry" : entry, "variant=rate", "");
            return;
        }
        String name = entry.substring(0, equals).strip();
        Optional<Double> rate = RATE.parse().apply(entry.substring(equals + 1).strip());
        int variant = plan.variantIndex(name);
        if (variant < 0) {
            List<String> known = plan.variants().stream().map(Variant::name).toList();
            String remedy = Suggestion.among(name, known)
                    .map(near -> "Did you mean " + near + "?")
                    .orElse("");
            refuse("unknown variant " + name, String.join(" or ", known), remedy);
        } else if (named[variant]) {
            refuse(name + " twice", "each variant once", "");
        } else if (rate.isEmpty()) {
            refuse(entry, "a " + RATE.expected(), "");
        } else {
            named[variant] = true;
            rates[variant] = rate.get();
        }
    }

    private void refuse(String found, String expected, String remedy) {
        problems.add(Problem.of(OPTION, found, expected, remedy));
    }
}
