package io.tallyward.engine.decide;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.digest.Digest;
import io.tallyward.engine.plan.CountRule.CountBy;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Notice;
import io.tallyward.engine.record.Notice.Kind;
import io.tallyward.engine.record.Notice.Severity;
import io.tallyward.engine.record.Verdict;
import java.time.Instant;
import java.util.LinkedHashMap;
import java.util.Locale;
import java.util.Map;
import java.util.Optional;

/** Puts into words what people are told about a decision: what happened, how sure that is, what to do. */
final class NoticeWriter {

    private static final String CAUTION = "The plan's owner decides.";

    private final Plan plan;

    NoticeWriter(Plan plan) {
        this.plan = plan;
    }

    /** Characters of a reason; the summary of a notice is short. */
    private static final int MOST_REASON = 600;

    /** Whether verdicts were told before trust changed. */
    enum Told {
        NONE(""),
        SOME(" A stop was told earlier: review it."),
        ALL(" Every verdict was told earlier: if the traffic was changed because of it, nothing is wrong; otherwise"
                + " review it.");

        private final String reminder;

        Told(String reminder) {
            this.reminder = reminder;
        }
    }

    private record Message(Kind kind, Severity severity, String what, String action) {}

    /** A verdict on a challenger that is now final. */
    Notice settled(DecisionRecord record, String variant, Verdict verdict, Optional<Comparison> look) {
        Map<String, String> facts = new LinkedHashMap<>();
        look.ifPresent(comparison -> addFigures(facts, comparison));
        addCounts(facts, record, variant);
        return notice(record, variant, settledMessage(variant, verdict), facts);
    }

    private Message settledMessage(String variant, Verdict verdict) {
        String control = plan.control().name();
        return switch (verdict) {
            case STOP_BENEFIT ->
                new Message(
                        Kind.STOP,
                        Severity.TICKET,
                        variant + " does better than " + control + "; the benefit boundary is crossed",
                        "Look at the experiment's page, then end the experiment and keep " + variant + ". " + CAUTION);
            case STOP_HARM ->
                new Message(
                        Kind.STOP,
                        Severity.PAGE,
                        variant + " does worse than " + control + "; the harm boundary is crossed",
                        "Stop showing " + variant + " and tell the owner, " + plan.owner() + ". " + CAUTION);
            case STOP_FUTILITY ->
                new Message(
                        Kind.STOP,
                        Severity.TICKET,
                        variant + " is unlikely to prove better than " + control + " within the planned information",
                        "Consider ending the experiment; carrying on is allowed and costs no error. " + CAUTION);
            case STOPPED ->
                new Message(
                        Kind.STOP,
                        Severity.INFO,
                        "the owner ended the experiment before " + variant + " crossed a boundary",
                        "Nothing to do; no effect was shown, and none was ruled out. " + CAUTION);
            case EXHAUSTED, WAITING, CONTINUE ->
                new Message(
                        Kind.EXHAUSTED,
                        Severity.INFO,
                        "the planned information or time is used up, and " + variant + " has crossed no boundary",
                        "End the experiment: it has not shown a difference of the size it was planned for. " + CAUTION);
        };
    }

    /**
     * A proposed change of the plan was refused.
     *
     * @param windowEnd how far the experiment is complete
     * @param decision digest of its last decision record
     */
    Notice refused(PlanBook.Refusal refusal, Instant windowEnd, String decision) {
        String id = new Digest("notice/1")
                .text(plan.experiment())
                .text(Kind.PLAN_REFUSED.code())
                .number(refusal.number())
                .hex();
        Map<String, String> facts = new LinkedHashMap<>();
        facts.put("standing", PlanDigest.of(plan));
        facts.put("proposed", PlanDigest.of(refusal.proposed()));
        return new Notice(
                "notice_" + id.substring(0, 32),
                Kind.PLAN_REFUSED,
                Severity.TICKET,
                plan.experiment(),
                "",
                windowEnd,
                plan.experiment() + ": a changed plan is refused, and the frozen plan stands: "
                        + shortened(refusal.reason()) + ".",
                facts,
                "Put what was frozen back into the plan file, with the amendments made so far, or give the changed plan a new"
                        + " experiment name; an amendment that comes too early needs a later moment.",
                decision);
    }

    private static String shortened(String reason) {
        return reason.length() <= MOST_REASON ? reason : reason.substring(0, MOST_REASON) + "...";
    }

    /** Trust has changed for the worse, or has returned. */
    Notice trust(DecisionRecord record, Told told) {
        Map<String, String> facts = new LinkedHashMap<>();
        facts.put("splitPValue", figure("%.3g", record.split().sequentialPValue()));
        if (record.split().origin() != null) {
            SplitWords.addFacts(facts, record.split().origin());
        }
        facts.put("events", Long.toString(record.outcomes().total()));
        facts.put("crossovers", Long.toString(record.outcomes().get(Outcome.CROSSOVER)));
        facts.put("late", Long.toString(record.outcomes().get(Outcome.LATE)));
        for (VariantCount count : record.counts()) {
            addUnits(facts, count);
            add(facts, trials(), count, count.trials());
        }
        return notice(record, "", trustMessage(record, told), facts);
    }

    /** Nobody is woken by what may well be the consequence of verdicts that were followed. */
    private static Message trustMessage(DecisionRecord record, Told told) {
        Severity urgent = told == Told.ALL ? Severity.TICKET : Severity.PAGE;
        String reason = record.trustReason();
        return switch (record.trust()) {
            case SOUND ->
                new Message(
                        Kind.RECOVERED,
                        Severity.INFO,
                        "the data are trusted again",
                        "Nothing to do; verdicts that were held are told now.");
            case MISMATCH ->
                new Message(
                        Kind.MISMATCH,
                        urgent,
                        reason,
                        "Find where units are lost or assigned twice before believing any result." + told.reminder);
            case STARVED ->
                new Message(
                        Kind.STARVED,
                        urgent,
                        reason,
                        "Check that the variant is still shown and that its events reach the topic." + told.reminder);
            case CROSSOVER ->
                new Message(
                        Kind.CROSSOVER,
                        Severity.TICKET,
                        reason,
                        "Check that a unit keeps its variant across pages, devices and releases." + told.reminder);
            case ORPHANS ->
                new Message(
                        Kind.ORPHANS,
                        urgent,
                        reason,
                        "Find where views of that variant are lost: they are missing from its trials too."
                                + told.reminder);
            case LATE ->
                new Message(
                        Kind.LATE,
                        Severity.TICKET,
                        reason,
                        "Check the delay of the pipeline; a longer grace needs a new experiment." + told.reminder);
        };
    }

    private Notice notice(DecisionRecord record, String variant, Message message, Map<String, String> facts) {
        String id = new Digest("notice/1")
                .text(record.hash())
                .text(message.kind().code())
                .text(variant)
                .hex();
        return new Notice(
                "notice_" + id.substring(0, 32),
                message.kind(),
                message.severity(),
                plan.experiment(),
                variant,
                record.windowEnd(),
                plan.experiment() + ": " + message.what() + ".",
                facts,
                message.action(),
                record.hash());
    }

    private static void addFigures(Map<String, String> facts, Comparison look) {
        facts.put("look", Integer.toString(look.look()));
        facts.put("z", figure("%.3f", look.z()));
        facts.put("upperBoundary", look.upper() == null ? "none" : figure("%.3f", look.upper()));
        facts.put("lowerBoundary", look.lower() == null ? "none" : figure("%.3f", look.lower()));
        facts.put("informationFraction", figure("%.3f", look.informationFraction()));
        facts.put("alphaSpent", figure("%.4g", look.alphaSpent()));
        facts.put("difference", figure("%+.5f", look.difference()));
        facts.put("repeatedInterval", interval(look.differenceLower(), look.differenceUpper()));
        if (look.clustering() != null) {
            facts.put("designEffect", figure("%.2f", look.clustering().designEffect()));
        }
        addAdjusted(facts, look.adjusted());
    }

    /** Absent while a comparison goes on, and where the record is bare. */
    private static void addAdjusted(Map<String, String> facts, Adjusted adjusted) {
        if (adjusted == null) {
            return;
        }
        Estimated difference = adjusted.difference();
        facts.put("adjustedPValue", figure("%.4g", adjusted.pValue()));
        facts.put("adjustedDifference", figure("%+.5f", difference.value()));
        facts.put("adjustedInterval", interval(difference.lower(), difference.upper()));
    }

    private static String interval(Double lower, Double upper) {
        return (lower == null ? "-inf" : figure("%+.5f", lower)) + " to "
                + (upper == null ? "+inf" : figure("%+.5f", upper));
    }

    private void addCounts(Map<String, String> facts, DecisionRecord record, String variant) {
        for (VariantCount count : record.counts()) {
            if (count.variant().equals(variant)
                    || count.variant().equals(plan.control().name())) {
                addUnits(facts, count);
                add(facts, trials(), count, count.trials());
                add(facts, countsViews() ? "clickedViews" : "successes", count, count.successes());
            }
        }
    }

    private boolean countsViews() {
        return plan.count().by() == CountBy.VIEW;
    }

    private String trials() {
        return countsViews() ? "views" : "trials";
    }

    /** Where every unit is one trial, trials say it. */
    private void addUnits(Map<String, String> facts, VariantCount count) {
        if (countsViews()) {
            add(facts, "units", count, count.units());
        }
    }

    private static void add(Map<String, String> facts, String name, VariantCount count, long number) {
        facts.merge(name + "." + count.variant(), Long.toString(number), NoticeWriter::sum);
    }

    private static String sum(String left, String right) {
        return Long.toString(Long.parseLong(left) + Long.parseLong(right));
    }

    private static String figure(String format, double value) {
        return String.format(Locale.ROOT, format, value);
    }
}
