package io.tallyward.demo.check;

import com.fasterxml.jackson.databind.JsonNode;
import io.tallyward.demo.check.MonitorApi.Standing;
import io.tallyward.demo.receiver.ReceivedNotice;
import io.tallyward.demo.story.Expectation;
import io.tallyward.demo.story.Expectation.ExpectedNotice;
import io.tallyward.demo.story.Expectation.ExpectedOrigin;
import io.tallyward.demo.truth.Count;
import io.tallyward.demo.truth.ExperimentTruth;
import java.time.Instant;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;

/**
 * Everything that is known about one experiment at the end, from both sides.
 *
 * @param truth what is right
 * @param standing what the monitor's API says
 * @param counts what the monitor's topics say
 * @param outside events outside the run, by the monitor's API
 * @param notices notices about this experiment that were delivered
 */
public record ExperimentCheck(
        ExperimentTruth truth, Standing standing, MonitorCounts counts, long outside, List<ReceivedNotice> notices) {

    private static final Set<String> STOPS = Set.of("stop-benefit", "stop-harm");

    public String experiment() {
        return truth.story().experiment();
    }

    /** The challengers in the order of the plan. */
    List<String> challengers() {
        List<String> variants = truth.story().variants();
        return variants.subList(1, variants.size());
    }

    /** Published code of the verdict on a challenger; empty when the API names none. */
    String verdict(String challenger) {
        return standing.comparison(challenger).path("verdict").asText();
    }

    /** The z of a challenger's latest look; a missing node before the first. */
    JsonNode z(String challenger) {
        return standing.comparison(challenger).path("z");
    }

    /** Whether the verdict is one that the truth contradicts but chance allows for. */
    boolean falseAlarm(String challenger) {
        Expectation expectation = truth.story().expectation();
        return expectation.falseAlarm() > 0 && STOPS.contains(verdict(challenger));
    }

    /** All comparisons about this experiment. */
    List<Finding> findings() {
        List<Finding> findings = new ArrayList<>();
        challengers().forEach(challenger -> findings.add(verdictFinding(challenger)));
        findings.add(trustFinding());
        findings.addAll(countFindings());
        truth.story().expectation().notice().ifPresent(notice -> findings.add(noticeFinding(notice)));
        truth.story().expectation().origin().ifPresent(origin -> findings.addAll(originFindings(origin)));
        return findings;
    }

    /** The comparisons that are about counts and not about what is concluded from them. */
    public List<Finding> countFindings() {
        List<Finding> findings = new ArrayList<>();
        findings.add(cellsFinding());
        findings.add(outcomesFinding());
        findings.add(outsideFinding());
        findings.add(new Finding(
                experiment() + ": totals in the API",
                Differences.between(
                        truth.totals(standing.completeUntil().toEpochMilli()), standing.counts(), Count.NONE)));
        return findings;
    }

    Finding cellsFinding() {
        return new Finding(
                experiment() + ": trials and successes by window",
                Differences.between(truth.cells(), counts.cells(experiment()), Count.NONE));
    }

    Finding outcomesFinding() {
        Map<String, Long> right = new HashMap<>(truth.outcomes());
        right.remove("outside");
        return new Finding(
                experiment() + ": outcomes of the events",
                Differences.between(right, counts.outcomes(experiment()), 0L));
    }

    private Finding outsideFinding() {
        long right = truth.outcomes().get("outside");
        return Finding.of(
                experiment() + ": events outside the run",
                outside == right,
                "the truth is " + right + ", the API says " + outside);
    }

    private Finding verdictFinding(String challenger) {
        Set<String> right = truth.story().expectation().verdicts().get(challenger);
        String verdict = verdict(challenger);
        return Finding.of(
                experiment() + "/" + challenger + ": verdict",
                right.contains(verdict) || falseAlarm(challenger),
                "right is " + String.join(" or ", right.stream().sorted().toList()) + ", the monitor says "
                        + (verdict.isEmpty() ? "nothing" : verdict));
    }

    private Finding trustFinding() {
        String right = truth.story().expectation().trust();
        return Finding.of(
                experiment() + ": trust",
                standing.trust().equals(right),
                "right is " + right + ", the monitor says " + standing.trust() + " ("
                        + standing.node().path("trustReason").asText() + ")");
    }

    /** Where the mismatch comes from in truth, and by the monitor; empty where there is none. */
    Optional<String> origins() {
        return truth.story()
                .expectation()
                .origin()
                .map(right -> experiment() + ": the mismatch began at " + right.began() + " with " + right.field() + " "
                        + right.value() + "; the monitor says " + told());
    }

    private JsonNode origin() {
        return standing.node().path("split").path("origin");
    }

    private String told() {
        JsonNode worst = origin().path("worst");
        return origin().isObject()
                ? "between " + origin().path("beganFrom").asText() + " and "
                        + origin().path("beganUntil").asText() + " with "
                        + worst.path("field").asText() + " "
                        + worst.path("value").asText()
                        + (worst.path("standsOut").asBoolean() ? "" : ", which does not stand out")
                : "nothing";
    }

    private List<Finding> originFindings(ExpectedOrigin right) {
        JsonNode worst = origin().path("worst");
        boolean segment = worst.path("field").asText().equals(right.field())
                && worst.path("value").asText().equals(right.value())
                && worst.path("standsOut").asBoolean();
        String difference = "right is " + right.began() + " with " + right.field() + " " + right.value()
                + ", the monitor says " + told();
        boolean named = notices.stream()
                .anyMatch(notice -> notice.kind().equals("mismatch")
                        && notice.summary().contains(right.field() + " " + right.value()));
        return List.of(
                Finding.of(experiment() + ": segment of the mismatch", segment, difference),
                Finding.of(experiment() + ": beginning of the mismatch", isNear(right), difference),
                Finding.of(experiment() + ": segment in the notice", named, difference + " in no notice"));
    }

    private boolean isNear(ExpectedOrigin right) {
        if (!origin().isObject()) {
            return false;
        }
        Instant from = Instant.parse(origin().path("beganFrom").asText());
        Instant until = Instant.parse(origin().path("beganUntil").asText());
        return !from.isAfter(right.began().plus(right.within()))
                && !until.isBefore(right.began().minus(right.within()));
    }

    private Finding noticeFinding(ExpectedNotice right) {
        String wanted = right.variant().isEmpty() ? right.kind() : right.kind() + " of " + right.variant();
        return Finding.of(
                experiment() + ": notice",
                notices.stream().anyMatch(notice -> notice.fits(right)),
                "a notice " + wanted + " was not delivered; delivered were "
                        + notices.stream()
                                .map(notice -> notice.kind() + " of " + notice.variant())
                                .toList());
    }
}
