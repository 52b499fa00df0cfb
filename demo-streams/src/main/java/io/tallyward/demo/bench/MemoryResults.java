package io.tallyward.demo.bench;

import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.demo.check.TextTable;
import java.util.List;
import java.util.Locale;

/**
 * What units take in memory, and how fast they are taken back.
 *
 * @param open the open ones
 * @param sealed those of sealed windows
 */
record MemoryResults(Row open, Row sealed) implements Findings {

    private static final String MARK = "memory";

    /**
     * Units in one state.
     *
     * @param megabytesPerMillion heap after collection
     * @param millionsRestoredPerSecond per second of CPU time, the best of some attempts
     */
    record Row(double megabytesPerMillion, double millionsRestoredPerSecond) {}

    /** As a line of output. */
    String line() {
        return MARK + " " + open.megabytesPerMillion + " " + open.millionsRestoredPerSecond + " "
                + sealed.megabytesPerMillion + " " + sealed.millionsRestoredPerSecond;
    }

    /** What {@link #line} said somewhere in a text. */
    static MemoryResults in(String output) {
        String[] words = output.lines()
                .filter(line -> line.startsWith(MARK + " "))
                .reduce((first, last) -> last)
                .orElseThrow(() -> new IllegalStateException("memory was not measured to the end"))
                .split(" ");
        return new MemoryResults(
                new Row(Double.parseDouble(words[1]), Double.parseDouble(words[2])),
                new Row(Double.parseDouble(words[3]), Double.parseDouble(words[4])));
    }

    @Override
    public List<String> lines() {
        return new TextTable(
                        List.of("units", "MB per million", "goal", "million/s restored", "goal"),
                        List.of(cells("open", open, "40"), cells("sealed", sealed, "24")))
                .lines();
    }

    private static List<String> cells(String name, Row row, String goal) {
        return List.of(
                name,
                String.format(Locale.ROOT, "%.1f", row.megabytesPerMillion),
                goal,
                String.format(Locale.ROOT, "%.1f", row.millionsRestoredPerSecond),
                "1");
    }

    @Override
    public String json() {
        ObjectNode all = new ObjectMapper().createObjectNode();
        ObjectNode memory = all.putObject("memory");
        put(memory.putObject("open"), open);
        put(memory.putObject("sealed"), sealed);
        return all.toString();
    }

    private static void put(ObjectNode object, Row row) {
        object.put("megabytesPerMillion", row.megabytesPerMillion)
                .put("millionsRestoredPerSecond", row.millionsRestoredPerSecond);
    }
}
