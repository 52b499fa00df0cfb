package io.tallyward.demo.check;

import io.tallyward.demo.truth.Truth;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.Map;

/**
 * The end of the demo in words.
 *
 * @param experiments the experiments in the order to show them
 * @param others comparisons that are about no single experiment
 */
public record Report(List<ExperimentCheck> experiments, List<Finding> others) {

    private static final List<String> HEADINGS = List.of(
            "experiment", "truth", "variant", "verdict", "trust", "z", "window counts", "wrong", "outcomes", "notices");

    public Report {
        experiments = List.copyOf(experiments);
        others = List.copyOf(others);
    }

    /** Compares the rejected records with the truth. */
    public static Finding rejects(Truth truth, MonitorCounts counts) {
        return new Finding("rejected records by reason", Differences.between(truth.rejects(), counts.rejects(), 0L));
    }

    /** Compares what the webhook receiver refused with what it should have refused, nothing. */
    public static Finding signatures(List<String> refusals) {
        return new Finding("webhook signatures", refusals);
    }

    /** Whether every comparison holds. */
    public boolean holds() {
        return findings().stream().allMatch(Finding::holds);
    }

    /** The table, remarks on it, and the last line. */
    public List<String> lines() {
        List<String> lines = new ArrayList<>(new TextTable(HEADINGS, rows()).lines());
        lines.add("");
        for (ExperimentCheck check : experiments) {
            for (String challenger : check.challengers()) {
                if (check.falseAlarm(challenger)) {
                    lines.add(String.format(
                            Locale.ROOT,
                            "%s: a false alarm, to be expected with probability %.2f; another seed will show the other side",
                            check.experiment(),
                            check.truth().story().expectation().falseAlarm()));
                }
            }
        }
        experiments.forEach(check -> check.origins().ifPresent(lines::add));
        List<Finding> differing =
                findings().stream().filter(finding -> !finding.holds()).toList();
        for (Finding finding : differing) {
            lines.add("differs: " + finding.subject());
            finding.differences().forEach(difference -> lines.add("    " + difference));
        }
        int all = findings().size();
        lines.add(
                differing.isEmpty()
                        ? "all " + all + " checks hold"
                        : differing.size() + " of " + all + " checks do not hold");
        return lines;
    }

    private List<Finding> findings() {
        List<Finding> findings = new ArrayList<>();
        experiments.forEach(check -> findings.addAll(check.findings()));
        findings.addAll(others);
        return findings;
    }

    private List<List<String>> rows() {
        List<List<String>> rows = new ArrayList<>();
        for (ExperimentCheck check : experiments) {
            boolean first = true;
            for (String challenger : check.challengers()) {
                rows.add(row(check, challenger, first));
                first = false;
            }
        }
        return rows;
    }

    private static List<String> row(ExperimentCheck check, String challenger, boolean first) {
        String z = check.z(challenger).isNumber()
                ? String.format(Locale.ROOT, "%.2f", check.z(challenger).asDouble())
                : "-";
        if (!first) {
            return List.of("", "", challenger, check.verdict(challenger), "", z, "", "", "", "");
        }
        return List.of(
                check.experiment(),
                check.truth().story().expectation().truth(),
                challenger,
                check.verdict(challenger),
                check.standing().trust(),
                z,
                String.format(Locale.ROOT, "%,d", check.truth().cells().size()),
                Long.toString(differing(check)),
                check.outcomesFinding().holds() ? "equal" : "differ",
                Integer.toString(check.notices().size()));
    }

    private static long differing(ExperimentCheck check) {
        Map<?, ?> right = check.truth().cells();
        Map<?, ?> counted = check.counts().cells(check.experiment());
        long missingOrOther = right.entrySet().stream()
                .filter(cell -> !cell.getValue().equals(counted.get(cell.getKey())))
                .count();
        long extra = counted.keySet().stream()
                .filter(cell -> !right.containsKey(cell))
                .count();
        return missingOrOther + extra;
    }
}
