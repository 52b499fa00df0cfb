package io.tallyward.statistics;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotNull;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.ReferenceTable.Row;
import java.io.IOException;
import java.io.InputStream;
import java.io.UncheckedIOException;
import java.nio.charset.StandardCharsets;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Locale;
import java.util.Map;
import java.util.OptionalDouble;
import java.util.Set;
import java.util.stream.Collectors;
import java.util.stream.Stream;

/**
 * The table of columns in the README beside the reference files, taken at its word: each column of each file is there, each
 * that is not an input is compared in every row that has a value, within the tolerance the table names, and the largest
 * error is of the order the table states.
 */
public final class ReferenceClaims {

    private static final String CLAIMS = "/reference/README.md";

    /** The largest error in the table is rounded up; a change of this factor is worth a look, smaller ones are not. */
    private static final double ORDER = 10;

    /** Errors below this are rounding, whatever the table says. */
    private static final double ROUNDING = 1e-15;

    /** How the error of a column is measured. */
    private enum Measure {
        INPUT,
        EXACT,
        ABSOLUTE,
        RELATIVE,
        /** Relative to the larger of 1 and the value. */
        MIXED;

        double error(double expected, double found) {
            double gap = expected == found ? 0 : Math.abs(expected - found);
            return switch (this) {
                case INPUT, EXACT, ABSOLUTE -> gap;
                case RELATIVE -> gap == 0 ? 0 : gap / Math.abs(expected);
                case MIXED -> gap / Math.max(1, Math.abs(expected));
            };
        }
    }

    private record Claim(Measure measure, double tolerance, double largest) {}

    private static final class Tally {
        private int compared;
        private double largest;
    }

    private final String file;
    private final ReferenceTable table;
    private final Map<String, Claim> claims;
    private final Map<String, Tally> tallies = new LinkedHashMap<>();

    private ReferenceClaims(String file) {
        this.file = file;
        table = ReferenceTable.read(file);
        claims = claims(file);
    }

    public static ReferenceClaims of(String file) {
        return new ReferenceClaims(file);
    }

    /** Every file that the table speaks of. */
    public static Set<String> files() {
        return lines().map(cells -> cells[1]).collect(Collectors.toSet());
    }

    public ReferenceTable table() {
        return table;
    }

    public void compare(Row row, String column, double... found) {
        Claim claim = claim(column);
        double[] expected = row.numbers(column);
        String where = file + " " + column + " of " + row.cells();
        assertEquals(expected.length, found.length, where);
        Tally tally = tallies.computeIfAbsent(column, key -> new Tally());
        for (int i = 0; i < expected.length; i++) {
            double error = claim.measure.error(expected[i], found[i]);
            tally.largest = Math.max(tally.largest, error);
            assertTrue(error <= claim.tolerance, where + ": found " + found[i] + ", error " + error);
        }
        tally.compared++;
    }

    /** A value that is not defined exactly where the file has none. */
    public void compare(Row row, String column, OptionalDouble found) {
        assertEquals(row.has(column), found.isPresent(), file + " " + column + " of " + row.cells());
        found.ifPresent(value -> compare(row, column, value));
    }

    public void same(Row row, String column, Object found) {
        assertEquals(Measure.EXACT, claim(column).measure, file + " " + column);
        assertEquals(row.text(column), String.valueOf(found), file + " " + column + " of " + row.cells());
        tallies.computeIfAbsent(column, key -> new Tally()).compared++;
    }

    /** To be asked when all rows are through. */
    public void assertComplete() {
        List<Row> rows = table.rows().toList();
        assertEquals(rows.get(0).cells().keySet(), claims.keySet(), "columns of " + file + " in the README's table");
        claims.forEach((column, claim) -> {
            if (claim.measure != Measure.INPUT) {
                long values = rows.stream().filter(row -> row.has(column)).count();
                Tally tally = tallies.get(column);
                assertNotNull(tally, file + " " + column + " is compared");
                assertEquals(values, tally.compared, file + " " + column + ": rows compared");
                assertTrue(
                        tally.largest <= ORDER * Math.max(claim.largest, ROUNDING),
                        String.format(
                                Locale.ROOT,
                                "%s %s: largest error %.1e (README: %.0e)",
                                file,
                                column,
                                tally.largest,
                                claim.largest));
            }
        });
    }

    private Claim claim(String column) {
        Claim claim = claims.get(column);
        assertNotNull(claim, file + " " + column + " is in the README's table");
        return claim;
    }

    /** Rows of the table of columns: file, column, measure, tolerance, largest error, then words. */
    private static Stream<String[]> lines() {
        try (InputStream in = ReferenceClaims.class.getResourceAsStream(CLAIMS)) {
            return new String(in.readAllBytes(), StandardCharsets.UTF_8)
                    .lines()
                    .filter(line -> line.matches("\\| \\w+\\.csv \\| `.*"))
                    .map(line -> line.split(" *\\| *", -1));
        } catch (IOException e) {
            throw new UncheckedIOException(e);
        }
    }

    private static Map<String, Claim> claims(String file) {
        Map<String, Claim> claims = new LinkedHashMap<>();
        lines().filter(cells -> cells[1].equals(file)).forEach(cells -> {
            Measure measure = Measure.valueOf(cells[3].toUpperCase(Locale.ROOT));
            for (String column : cells[2].split(" ")) {
                Claim claim = new Claim(measure, number(cells[4]), number(cells[5]));
                assertEquals(null, claims.put(column.replace("`", ""), claim), file + " " + column + " claimed once");
            }
        });
        return claims;
    }

    private static double number(String cell) {
        return cell.isEmpty() ? 0 : Double.parseDouble(cell);
    }
}
