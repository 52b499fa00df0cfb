package io.tallyward.statistics;

import java.io.IOException;
import java.io.InputStream;
import java.io.UncheckedIOException;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.stream.Stream;

/** A reference file: plain commas, one header row. Numbers too small for a double read as 0. */
public final class ReferenceTable {

    private final List<Row> rows = new ArrayList<>();

    private ReferenceTable() {}

    public static ReferenceTable read(String name) {
        String path = "/reference/" + name;
        try (InputStream in = ReferenceTable.class.getResourceAsStream(path)) {
            if (in == null) {
                throw new IllegalArgumentException("reference file: " + path + " (expected: on the class path)");
            }
            List<String> lines = new String(in.readAllBytes(), StandardCharsets.UTF_8)
                    .lines()
                    .toList();
            String[] header = lines.get(0).split(",");
            ReferenceTable table = new ReferenceTable();
            for (String line : lines.subList(1, lines.size())) {
                String[] cells = line.split(",", -1);
                Map<String, String> row = new LinkedHashMap<>();
                for (int i = 0; i < header.length; i++) {
                    row.put(header[i], cells[i]);
                }
                table.rows.add(new Row(row));
            }
            return table;
        } catch (IOException e) {
            throw new UncheckedIOException(e);
        }
    }

    public Stream<Row> rows() {
        return rows.stream();
    }

    /** The rows by the value of one column, in order of appearance. */
    public Map<String, List<Row>> by(String column) {
        Map<String, List<Row>> groups = new LinkedHashMap<>();
        rows.forEach(row -> groups.computeIfAbsent(row.text(column), key -> new ArrayList<>())
                .add(row));
        return groups;
    }

    /** One row, by column name. */
    public record Row(Map<String, String> cells) {

        public String text(String column) {
            String cell = cells.get(column);
            if (cell == null) {
                throw new IllegalArgumentException("column: " + column + " (expected: one of " + cells.keySet() + ")");
            }
            return cell;
        }

        public boolean has(String column) {
            return !text(column).equals("NA");
        }

        public double number(String column) {
            return parse(text(column));
        }

        public long count(String column) {
            return Long.parseLong(text(column));
        }

        public double[] numbers(String column) {
            return Stream.of(text(column).split(" ")).mapToDouble(Row::parse).toArray();
        }

        public long[] counts(String column) {
            return Stream.of(text(column).split(" ")).mapToLong(Long::parseLong).toArray();
        }

        private static double parse(String cell) {
            return switch (cell) {
                case "Inf" -> Double.POSITIVE_INFINITY;
                case "-Inf" -> Double.NEGATIVE_INFINITY;
                default -> Double.parseDouble(cell);
            };
        }
    }
}
