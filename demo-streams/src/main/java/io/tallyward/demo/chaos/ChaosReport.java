package io.tallyward.demo.chaos;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.chaos.Recoveries.Strike;
import io.tallyward.demo.check.Finding;
import io.tallyward.demo.check.TextTable;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.TreeMap;

/**
 * What was done, how long the monitor took to recover, and what the comparisons say.
 *
 * @param seed of faults and stream
 * @param events how many were sent
 * @param took the whole run
 * @param strikes the faults in the order in which they struck
 * @param findings all comparisons
 */
public record ChaosReport(long seed, long events, Duration took, List<Strike> strikes, List<Finding> findings) {

    private static final List<String> HEADINGS = List.of("", "fault", "whom", "at", "after events", "recovered in", "");

    public ChaosReport {
        strikes = List.copyOf(strikes);
        findings = List.copyOf(findings);
    }

    /** Whether all is equal. */
    public boolean holds() {
        return findings.stream().allMatch(Finding::holds);
    }

    /** Two tables, whatever differs, and the last line. */
    public List<String> lines() {
        List<String> lines = new ArrayList<>(new TextTable(HEADINGS, rows()).lines());
        lines.add("");
        lines.addAll(summary());
        lines.add("");
        findings.forEach(finding -> lines.add((finding.holds() ? "equal    " : "DIFFERS  ") + finding.subject()));
        List<Finding> differing =
                findings.stream().filter(finding -> !finding.holds()).toList();
        for (Finding finding : differing) {
            lines.add("differs: " + finding.subject());
            finding.differences().forEach(difference -> lines.add("    " + difference));
        }
        lines.add("");
        lines.add(String.format(
                Locale.ROOT,
                "%d faults, %,d events, %d s, seed %d: %s",
                strikes.size(),
                events,
                took.toSeconds(),
                seed,
                differing.isEmpty()
                        ? "all " + findings.size() + " checks hold"
                        : differing.size() + " of " + findings.size() + " checks do not hold"));
        return lines;
    }

    private List<List<String>> rows() {
        List<List<String>> rows = new ArrayList<>();
        for (Strike strike : strikes) {
            rows.add(List.of(
                    Integer.toString(rows.size() + 1),
                    strike.fault().code(),
                    strike.victim(),
                    String.format(Locale.ROOT, "%7.1f s", seconds(strike.moment())),
                    String.format(Locale.ROOT, "%,12d", strike.events()),
                    strike.recovery()
                            .map(time -> String.format(Locale.ROOT, "%6.1f s", seconds(time)))
                            .orElse("never"),
                    strike.tooSoon() ? "while recovering" : ""));
        }
        return rows;
    }

    /** Recovery times by kind of fault. */
    private List<String> summary() {
        Map<Fault, List<Double>> times = new TreeMap<>();
        for (Strike strike : strikes) {
            strike.recovery()
                    .ifPresent(time -> times.computeIfAbsent(strike.fault(), absent -> new ArrayList<>())
                            .add(seconds(time)));
        }
        List<List<String>> rows = new ArrayList<>();
        times.forEach((fault, list) -> {
            list.sort(Comparator.naturalOrder());
            rows.add(List.of(
                    fault.code(),
                    Integer.toString(list.size()),
                    String.format(Locale.ROOT, "%.1f s", list.get((list.size() - 1) / 2)),
                    String.format(Locale.ROOT, "%.1f s", list.get(list.size() - 1))));
        });
        return new TextTable(List.of("fault", "count", "median recovery", "longest"), rows).lines();
    }

    /** The same for machines, one object. */
    public String json() {
        ObjectMapper mapper = new ObjectMapper();
        ObjectNode report = mapper.createObjectNode();
        report.put("seed", seed);
        report.put("events", events);
        report.put("seconds", seconds(took));
        ArrayNode faults = report.putArray("faults");
        for (Strike strike : strikes) {
            ObjectNode fault = faults.addObject()
                    .put("fault", strike.fault().code())
                    .put("whom", strike.victim())
                    .put("seconds", seconds(strike.moment()))
                    .put("eventsSent", strike.events())
                    .put("whileRecovering", strike.tooSoon());
            fault.put(
                    "recoverySeconds",
                    strike.recovery().map(ChaosReport::seconds).orElse(null));
        }
        ArrayNode checks = report.putArray("checks");
        for (Finding finding : findings) {
            ObjectNode check =
                    checks.addObject().put("subject", finding.subject()).put("holds", finding.holds());
            ArrayNode differences = check.putArray("differences");
            finding.differences().forEach(differences::add);
        }
        report.put("holds", holds());
        return report.toString();
    }

    private static double seconds(Duration duration) {
        return duration.toMillis() / 1000.0;
    }
}
