package io.tallyward.service.explain;

import io.tallyward.engine.plan.LookSchedule;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.Trust;

/** What a verdict means, what it does not, and what follows from it. */
final class VerdictWords {

    private VerdictWords() {}

    /** In a few words. */
    static String headline(Plan plan, String variant, Standing standing) {
        String control = plan.control().name();
        if (standing.held() != null) {
            return "no verdict on " + variant + ", as the data are not trusted";
        }
        return switch (standing.verdict()) {
            case WAITING -> "it is too early to say anything about " + variant;
            case CONTINUE -> "no difference between " + variant + " and " + control + " is established yet";
            case STOP_BENEFIT -> variant + " does better than " + control;
            case STOP_HARM -> variant + " does worse than " + control;
            case STOP_FUTILITY -> variant + " is unlikely to prove better than " + control;
            case EXHAUSTED -> "no difference between " + variant + " and " + control + " was found";
            case STOPPED -> "the experiment was ended before anything was found about " + variant;
        };
    }

    /** What was found. */
    static String found(Plan plan, String variant, Standing standing) {
        String control = plan.control().name();
        if (standing.held() != null) {
            return "By the numbers alone the verdict on " + variant + " would be \""
                    + standing.held().code()
                    + "\"; it is held back, because the numbers cannot be believed while the data are in doubt.";
        }
        return switch (standing.verdict()) {
            case WAITING -> "No look at " + variant + " has been taken yet: " + due(plan) + ".";
            case CONTINUE -> "Neither a benefit nor a harm of " + variant + " is established so far.";
            case STOP_BENEFIT ->
                "The finding: " + variant + " does better than " + control + ", by more than chance explains.";
            case STOP_HARM ->
                "The finding: " + variant + " does worse than " + control + ", by more than chance explains.";
            case STOP_FUTILITY ->
                "The finding: " + variant + " is unlikely to prove better than " + control
                        + " within what was planned, so that going on is hardly worth the time.";
            case EXHAUSTED ->
                "The planned time or information is used up, and no difference between " + variant + " and " + control
                        + " has shown that chance does not explain.";
            case STOPPED ->
                "The owner ended the experiment before " + variant
                        + " crossed a boundary, so that neither a benefit nor a harm is established.";
        };
    }

    private static String due(Plan plan) {
        String when = plan.looks() instanceof LookSchedule.Every every
                ? "one is due every " + every.interval().toMinutes() / 60.0 + " hours"
                : "one is due as soon as enough is counted";
        return when.replace(".0 hours", " hours") + ", and needs at least "
                + plan.test().minimumPerCell() + " units with a click and as many without in each variant";
    }

    /** What it does not say. */
    static String limits(Standing standing) {
        if (standing.held() != null) {
            return "that there is an effect (a broken split or lost events can look like one)";
        }
        return switch (standing.verdict()) {
            case WAITING, CONTINUE ->
                "that there is no difference, or that one is coming (only a boundary crossed at a look is a finding; a number"
                        + " close to it is not)";
            case STOP_BENEFIT ->
                "that the gain will be exactly this large or will last, nor anything about what was not counted here";
            case STOP_HARM -> "why it does worse, nor that a changed version would too";
            case STOP_FUTILITY -> "that both are the same (a small difference, either way, remains possible)";
            case EXHAUSTED -> "that both are the same (differences within the range above remain possible)";
            case STOPPED -> "that both are the same: the experiment ended before its time";
        };
    }

    /** What to do. */
    static String action(Plan plan, String variant, Standing standing) {
        return switch (standing.verdict()) {
            case WAITING -> "nothing yet; let it run.";
            case CONTINUE -> "let " + variant + " run, and change nothing because of these numbers.";
            case STOP_BENEFIT -> plan.owner() + " may end the experiment and keep " + variant + "; there is no hurry.";
            case STOP_HARM -> "stop showing " + variant + " now, and tell " + plan.owner() + ".";
            case STOP_FUTILITY ->
                plan.owner() + " decides whether the rest of the run is worth its time for " + variant
                        + "; going on breaks no rule.";
            case EXHAUSTED ->
                "end the experiment; keep whichever of " + plan.control().name() + " and " + variant
                        + " is better for other reasons.";
            case STOPPED -> "nothing; these numbers decide nothing, and " + plan.owner() + " has decided already.";
        };
    }

    /** What would restore trust. */
    static String repair(Trust trust) {
        return switch (trust) {
            case SOUND -> "nothing.";
            case MISMATCH ->
                "find where units of one variant are lost or counted twice (assignment, redirects, logging, filters); a split"
                        + " that went wrong does not heal, so begin a new experiment once it is mended.";
            case CROSSOVER -> "see to it that a unit keeps its variant across pages, devices and releases.";
            case ORPHANS ->
                "find where views of that variant are lost, between page and topic; its trials lack them too, so begin a new"
                        + " experiment once it is mended.";
            case STARVED -> "check whether events reach the topic at all, and whether the variant is still shown.";
            case LATE -> "find what delays the events between the site and the topic.";
        };
    }
}
