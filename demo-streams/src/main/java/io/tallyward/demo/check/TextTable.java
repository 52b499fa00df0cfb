package io.tallyward.demo.check;

import java.util.ArrayList;
import java.util.List;

/**
 * A table for a terminal: columns as wide as their widest cell, two blanks apart, a rule under the headings.
 *
 * @param headings one per column
 * @param rows cells, as many per row as there are headings
 */
public record TextTable(List<String> headings, List<List<String>> rows) {

    /** The table, line by line. */
    public List<String> lines() {
        int[] widths = new int[headings.size()];
        List<List<String>> all = new ArrayList<>();
        all.add(headings);
        all.addAll(rows);
        for (List<String> row : all) {
            for (int column = 0; column < widths.length; column++) {
                widths[column] = Math.max(widths[column], row.get(column).length());
            }
        }
        List<String> lines = new ArrayList<>();
        for (List<String> row : all) {
            StringBuilder line = new StringBuilder();
            for (int column = 0; column < widths.length; column++) {
                String cell = row.get(column);
                line.append(cell).append(" ".repeat(widths[column] - cell.length() + 2));
            }
            lines.add(line.toString().stripTrailing());
        }
        int width = lines.stream().mapToInt(String::length).max().orElse(0);
        lines.add(1, "-".repeat(width));
        return lines;
    }
}
