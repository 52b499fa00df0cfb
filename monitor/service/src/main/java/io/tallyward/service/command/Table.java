package io.tallyward.service.command;

import java.util.ArrayList;
import java.util.List;

/** A table for people: first column to the left, the others, which are figures, to the right. */
final class Table {

    private static final String GAP = "  ";

    private final List<List<String>> rows = new ArrayList<>();
    private final List<Group> groups = new ArrayList<>();

    /** Columns that belong together, from the first to before the last, under one title. */
    private record Group(int from, int to, String title) {
        int width(int[] widths) {
            int width = -GAP.length();
            for (int i = from; i < to; i++) {
                width += widths[i] + GAP.length();
            }
            return width;
        }
    }

    Table(String... header) {
        row(header);
    }

    Table row(String... cells) {
        rows.add(List.of(cells));
        return this;
    }

    /**
     * Puts a title above the next columns; the first column never has one.
     *
     * @param title may be empty
     * @param columns how many columns it stands above
     */
    Table group(String title, int columns) {
        int from = groups.isEmpty() ? 1 : groups.get(groups.size() - 1).to();
        groups.add(new Group(from, from + columns, title));
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
        makeRoom(widths);
        List<String> lines = new ArrayList<>();
        for (List<String> row : rows) {
            lines.add(line(row, widths));
        }
        lines.add(1, "-".repeat(lines.stream().mapToInt(String::length).max().orElse(0)));
        if (!groups.isEmpty()) {
            lines.add(0, titles(widths));
        }
        return lines;
    }

    /** The titles of the groups, each with a stroke as far as its columns reach. */
    private String titles(int[] widths) {
        StringBuilder line = new StringBuilder(" ".repeat(widths[0]));
        for (Group group : groups) {
            int width = group.width(widths);
            int rest = width - group.title().length();
            String stroke = rest < 2 || group.title().isEmpty() ? " ".repeat(rest) : "-".repeat(rest - 1) + " ";
            line.append(GAP).append(stroke).append(group.title());
        }
        return line.toString().stripTrailing();
    }

    /** Widens the columns of a group until its title fits above them. */
    private void makeRoom(int[] widths) {
        for (Group group : groups) {
            int width = group.width(widths);
            widths[group.from()] += Math.max(0, group.title().length() - width);
        }
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
