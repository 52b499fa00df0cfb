package io.tallyward.service.explain;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.stream.Collectors;

/** One decision, explained: a headline, paragraphs, and a row of figures for each variant. */
public final class Explanation {

    private static final String CAUTION =
            "This is advice under the plan, which its owner decides upon; it is not for clinical or safety decisions.";

    private final Moment moment;
    private final DecisionRecord last;
    private final Plan plan;
    private final DecisionRecord record;

    Explanation(Moment moment, DecisionRecord last) {
        this.moment = moment;
        this.last = last;
        plan = moment.plan();
        record = moment.record();
    }

    /** The record that is explained. */
    public DecisionRecord record() {
        return record;
    }

    /** How many records with a look there were up to it. */
    public int look() {
        return moment.number();
    }

    /** The verdict on every challenger in a few words. */
    public String headline() {
        return plan.experiment() + ": "
                + moment.standings().entrySet().stream()
                        .map(entry -> VerdictWords.headline(plan, entry.getKey(), entry.getValue()))
                        .collect(Collectors.joining("; "))
                + ".";
    }

    /** Everything, in the order in which it is best read: the question, each challenger, the data, what to do. */
    public List<String> paragraphs() {
        List<String> all = new ArrayList<>();
        all.add("The question was: " + plan.question() + " " + when());
        moment.standings().forEach((variant, standing) -> all.add(challenger(variant, standing)));
        all.add(TrustWords.of(plan, record) + since());
        String limits = moment.standings().values().stream()
                .map(VerdictWords::limits)
                .distinct()
                .collect(Collectors.joining("; nor "));
        all.add("What this does not say: " + limits + ".");
        boolean told = moment.standings().values().stream()
                .anyMatch(standing -> standing.verdict().settled());
        all.add("What to do: " + action() + (told ? " " + CAUTION : ""));
        return all;
    }

    private String challenger(String variant, Standing standing) {
        String found = VerdictWords.found(plan, variant, standing);
        return standing.look() == null
                ? found
                : found + " " + String.join(" ", new FindingWords(plan, variant, standing).sentences());
    }

    private String when() {
        return switch (record.occasion()) {
            case LOOK ->
                "This was look " + moment.number() + ", with everything counted up to "
                        + Numbers.minute(record.windowEnd()) + ".";
            case END ->
                record.verdict() == Verdict.STOPPED
                        ? "The owner ended the experiment on " + Numbers.minute(record.windowEnd())
                                + "; no last look is taken then."
                        : "The run ended on " + Numbers.minute(record.windowEnd())
                                + ", and no last look was possible: a variant had too few clicks, or too few units without one.";
            case PLAN, AMENDED, TRUST ->
                "This is how things stood on " + Numbers.minute(record.windowEnd()) + ", after "
                        + (moment.number() == 0
                                ? "no look yet"
                                : moment.number() + (moment.number() == 1 ? " look" : " looks"))
                        + ".";
        };
    }

    private String action() {
        boolean doubted = record.trust() != Trust.SOUND;
        if (doubted && !moment.settled()) {
            return VerdictWords.repair(record.trust()) + " Until then act on no rate.";
        }
        return moment.standings().entrySet().stream()
                .map(entry -> VerdictWords.action(plan, entry.getKey(), entry.getValue()))
                .distinct()
                .collect(Collectors.joining(" "));
    }

    /** What has come after the record that is explained, if it matters. */
    private String since() {
        if (last.trust() == Trust.SOUND || record.trust() != Trust.SOUND) {
            return "";
        }
        return " But since then, by " + Numbers.minute(last.windowEnd()) + ", the data have lost trust: "
                + TrustWords.reason(last) + ". "
                + (moment.settled()
                        ? "The verdict stands; if the traffic was changed because of it, that may be all there is to it, otherwise"
                                + " have it reviewed."
                        : "See to the data first: " + VerdictWords.repair(last.trust()));
    }

    /**
     * The figures of one variant, the control first.
     *
     * @param variant its name
     * @param trials units, or views where the plan counts views
     * @param successes trials with a click
     * @param rate their share
     * @param difference from the control's rate; null for the control and where there was no look
     * @param lower lower end of what the difference may be; null where there is none
     * @param upper upper end; null where there is none
     * @param verdict as told; null for the control
     * @param held what waits for trust; null where nothing does
     */
    public record Row(
            String variant,
            long trials,
            long successes,
            double rate,
            Double difference,
            Double lower,
            Double upper,
            Verdict verdict,
            Verdict held) {}

    /** The figures of every variant: the challengers' as of their last look, the control's as of the record. */
    public List<Row> rows() {
        List<Row> rows = new ArrayList<>();
        VariantTotals control = VariantTotals.of(record, plan.control().name());
        rows.add(new Row(
                plan.control().name(),
                control.trials(),
                control.successes(),
                control.rate(),
                null,
                null,
                null,
                null,
                null));
        for (Map.Entry<String, Standing> entry : moment.standings().entrySet()) {
            rows.add(row(entry.getKey(), entry.getValue()));
        }
        return rows;
    }

    private Row row(String variant, Standing standing) {
        VariantTotals own = VariantTotals.of(standing.at() == null ? record : standing.at(), variant);
        Comparison look = standing.look();
        boolean adjusted = look != null && look.adjusted() != null;
        return new Row(
                variant,
                own.trials(),
                own.successes(),
                own.rate(),
                look == null ? null : look.difference(),
                look == null ? null : adjusted ? look.adjusted().difference().lower() : look.differenceLower(),
                look == null ? null : adjusted ? look.adjusted().difference().upper() : look.differenceUpper(),
                standing.verdict(),
                standing.held());
    }

    /** The plan that the decision was made under. */
    public Plan plan() {
        return plan;
    }
}
