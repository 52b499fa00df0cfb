package io.tallyward.service.page;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.util.List;

/** What the published states are called on a page, what they mean and what to do about them. */
final class Wording {

    static final String NOT_AT_WORK = "Not at work";

    static final String NOT_KEYED = "Not keyed by unit";

    static final String UNKEYED =
            "The input topic is not keyed by unit: units are counted more than once and clicks miss their views. Do not"
                    + " act on any rate here. Key the topic by unit and start anew.";

    private Wording() {}

    /**
     * One state in words.
     *
     * @param sign a shape that tells the state without its colour
     * @param label its name
     * @param meaning what it means
     * @param action what to do
     */
    record Words(String sign, String label, String meaning, String action) {

        Words with(String other) {
            return new Words(sign, label, meaning, other);
        }
    }

    static Words of(Verdict verdict) {
        return switch (verdict) {
            case WAITING ->
                new Words(
                        "○",
                        "Waiting",
                        "No look has been taken yet.",
                        "Nothing. The first look follows when it is due and every variant has enough successes and failures.");
            case CONTINUE ->
                new Words(
                        "→",
                        "Continue",
                        "Looks were taken and no boundary was crossed: neither a benefit nor a harm is established.",
                        "Let it run. A statistic close to its boundary is no finding; only a crossing at a look is.");
            case STOP_BENEFIT ->
                new Words(
                        "▲",
                        "Stop: benefit",
                        "The benefit boundary was crossed at a look while the data were trusted. The verdict is final.",
                        "It can wait for the morning. The owner may end the experiment and keep the variant.");
            case STOP_HARM ->
                new Words(
                        "▼",
                        "Stop: harm",
                        "The harm boundary was crossed at a look while the data were trusted. The verdict is final.",
                        "Tell the owner now: stop showing the variant. Switching it off is the safe choice.");
            case STOP_FUTILITY ->
                new Words(
                        "■",
                        "Stop: futility",
                        "A benefit of the planned size has become unlikely. This is advice; going on breaks no rule.",
                        "It can wait for the morning. The owner decides whether the rest of the run is worth its time.");
            case EXHAUSTED ->
                new Words(
                        "◆",
                        "Exhausted",
                        "The planned information or time is used up and no boundary was crossed. The verdict is final.",
                        "It can wait for the morning. End the experiment; it found no difference of the planned size.");
            case STOPPED ->
                new Words(
                        "●",
                        "Stopped by owner",
                        "The owner ended the experiment before a boundary was crossed. The verdict is final.",
                        "Nothing. No effect was shown, and none was ruled out.");
        };
    }

    /**
     * What to do about a verdict, with names in place of "the variant".
     *
     * @param variants the variants that have the verdict; where there is none, no name is put in
     */
    static String action(Verdict verdict, List<String> variants) {
        if (variants.isEmpty()) {
            return of(verdict).action();
        }
        return switch (verdict) {
            case STOP_BENEFIT ->
                "It can wait for the morning. The owner may end the experiment and keep "
                        + String.join(" or ", variants) + ".";
            case STOP_HARM ->
                "Tell the owner now: stop showing " + String.join(" and ", variants) + ". Switching "
                        + (variants.size() == 1 ? "it" : "them") + " off is the safe choice.";
            case STOP_FUTILITY ->
                "It can wait for the morning. The owner decides whether the rest of the run is worth its time for "
                        + String.join(" and ", variants) + ".";
            case WAITING, CONTINUE, EXHAUSTED, STOPPED -> of(verdict).action();
        };
    }

    /**
     * A verdict on an experiment that goes on although some of its variants have theirs.
     *
     * @param ended the variants whose verdict is told, at least one
     * @param action what to do about those
     */
    static Words partly(Verdict verdict, List<String> ended, String action) {
        Words words = of(verdict);
        return new Words(
                words.sign(),
                words.label(),
                "The verdict on " + String.join(" and ", ended)
                        + " is reached; no boundary was crossed by the others, which go on.",
                action + " Let the others run.");
    }

    /** What it means that a verdict waits for trust to return. */
    static String held(Verdict verdict) {
        String found = switch (verdict) {
            case STOP_BENEFIT -> "The benefit boundary was crossed";
            case STOP_HARM -> "The harm boundary was crossed";
            case STOP_FUTILITY -> "A benefit of the planned size has become unlikely";
            case EXHAUSTED -> "The planned information or time is used up without a crossing";
            case WAITING, CONTINUE, STOPPED ->
                throw new IllegalArgumentException("held verdict: " + verdict.code() + " (expected: a final one)");
        };
        return found + ", but the data are not trusted: the verdict is held, and told if trust returns.";
    }

    /**
     * A verdict that is not final, while the data are not trusted.
     *
     * @param held what is held, in words; empty when nothing is
     */
    static Words untrusted(Words verdict, String held) {
        String meaning = held.isEmpty() ? "No verdict is told while the data are not trusted." : held;
        return new Words(
                verdict.sign(), verdict.label(), meaning, "Nothing about the variants; see to the data first.");
    }

    static Words of(Trust trust) {
        return switch (trust) {
            case SOUND -> new Words("✓", "Sound", "Nothing speaks against the data.", "Nothing.");
            case MISMATCH ->
                new Words(
                        "!",
                        "Split mismatch",
                        "The observed split contradicts the planned one, so the variants may not be comparable."
                                + " Verdicts are withheld.",
                        "Do not act on the rates. Find where units of one variant are lost or added: assignment, logging,"
                                + " filters. Begin where the shares left the plan.");
            case CROSSOVER ->
                new Words(
                        "!",
                        "Crossovers",
                        "Too many units were seen under a second variant. Verdicts are withheld.",
                        "Do not act on the rates. Check that a unit keeps its variant across devices, sessions and caches.");
            case ORPHANS ->
                new Words(
                        "!",
                        "Orphans",
                        "Clicks without a view before them are more frequent under one variant. Verdicts are withheld.",
                        "Do not act on the rates. Find where views of that variant are lost; its trials lack them too.");
            case STARVED ->
                new Words(
                        "!",
                        "Starved",
                        "A variant, or the whole stream, has fallen silent. Verdicts are withheld.",
                        "Check first whether events reach the input topics at all, then whether this variant is still shown.");
            case LATE ->
                new Words(
                        "!",
                        "Late events",
                        "Too many events arrive after their window was sealed. Verdicts are withheld.",
                        "Look for a delay between the site and the input topics. Late events are counted, never added.");
        };
    }

    static String of(Outcome outcome) {
        return switch (outcome) {
            case TRIAL -> "the exposure that stands as its unit's first";
            case SUCCESS -> "the click that made a trial a success";
            case REPEAT -> "a further exposure or click of a trial";
            case EXPIRED -> "a click after the attribution time of its trial";
            case CROSSOVER -> "an event of a unit under another variant than its first";
            case ORPHAN -> "a click that no exposure precedes";
            case LATE -> "would still have changed a count, but its window was sealed";
            case OUTSIDE -> "outside the run";
            case DUPLICATE -> "seen before";
        };
    }
}
