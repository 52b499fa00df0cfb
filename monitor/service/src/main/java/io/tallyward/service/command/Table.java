package io.tallyward.service.command;

import java.util.ArrayList;
import java.util.List;

/** A table for people: first column to the left, the others, which are figures, to the right. */
final class Table {

    private static final String GAP = "  ";

    private final List<List<String>> rows = new ArrayList<>();

    Table(String... header) {
        row(header);
    }

    Table row(String... cells) {
        rows.add(List.of(cells));
        return this;
    }

    /** The lines of the table, a rule under its header; no line ends in blanks. */
    List<String> lines() {
        int[] widths = new int[rows.get(0).size()];
        for (List<String> row : rows) {
            for (int i = 0; i < widths.length; i++) {
                widths[i] = Math.max(widths[i], row.get(i).length());
            }
        }
        List<String> lines = new ArrayList<>();
        for (List<String> row : rows) {
            lines.add(line(row, widths));
        }
        lines.add(1, "-".repeat(lines.stream().mapToInt(String::length).max().orElse(0)));
        return lines;
    }

    private static String line(List<String> row, int[] widths) {
        StringBuilder line = new StringBuilder();
        for (int i = 0; i < widths.length; i++) {
            String blanks = " ".repeat(widths[i] - row.get(i).length());
            line.append(i == 0 ? "" : GAP);
            line.append(i == 0 ? row.get(i) + blanks : blanks + row.get(i));
        }
        return line.toString().stripTrailing();
    }
}
