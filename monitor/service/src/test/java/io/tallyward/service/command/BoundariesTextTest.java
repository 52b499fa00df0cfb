package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** The figures themselves are checked in {@link BoundariesFiguresTest} and {@link PlannedPathTest}. */
class BoundariesTextTest {

    private static final String LONG = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.4, control: true}, wide: {share: 0.3}, tall: {share: 0.3}}
            test:
              alpha: 0.05
              baseline: 0.12
              smallest-effect: 0.006
              clock: calendar
              information: trials
              harm: {alpha: 0.03, spending: pocock, silent-before: 0.1}
            looks: {every: P1D}
            futility: {conditional-power: 0.1, under: trend}
            run: {from: 2026-05-04T00:00:00Z, at-least: P7D, at-most: P28D}
            """;

    @TempDir
    Path directory;

    @Test
    void explainsItselfToPeople() throws IOException {
        assertEquals("""
                fare-chip: does a fare chip bring more clicks?

                chip against bare
                  tests        benefit at level 0.025, one-sided; harm is not tested
                  spending     obrien-fleming
                  clock        information: error is spent as information comes in
                  information  observed: by trials and the success rates seen
                  futility     the chance of missing the smallest effect is spent by hwang-shih-decani(-2.0); advice
                               that may be overruled at no cost in false alarms
                  looks for    0.12 -> 0.126, +0.600 points or +5.00 % of the rate, with power 0.8
                  needs        103,356 trials of all variants (bare 51,678, chip 51,678), 3,692 a day to have them
                               within P28D
                  single look  94,075 trials if read once, at the end; looking on the way costs a factor of 1.0987
                  drift        2.9365 towards the benefit, the z to expect at the end with the smallest effect;
                               maximum information 239,533

                When to stop
                                                         benefit
                look  information   trials  alpha spent  upper z  lower z  futility z
                ---------------------------------------------------------------------
                1          0.2000   20,671      5.4e-07   4.8769        -     -0.8465
                2          0.4000   41,342     0.000394   3.3570        -     -0.0273
                3          0.6000   62,013     0.003808   2.6803        -      0.6803
                4          0.8000   82,684     0.012212   2.2898        -      1.3395
                5          1.0000  103,356     0.025000   2.0310        -           -

                What it takes to stop at that look
                      one-look p  difference in points
                look     benefit     benefit  futility
                --------------------------------------
                1        5.4e-07      +2.228    -0.387
                2        0.00039      +1.085    -0.009
                3        0.00368      +0.707    +0.179
                4        0.01102      +0.523    +0.306
                5        0.02113      +0.415         -

                Chance to have stopped by then, futility obeyed
                      without an effect  with the smallest effect
                look  benefit  futility         benefit  futility
                -------------------------------------------------
                1     <0.0001    0.1986          0.0002    0.0154
                2      0.0004    0.5101          0.0668    0.0384
                3      0.0038    0.7713          0.3445    0.0726
                4      0.0121    0.9192          0.6358    0.1237
                5      0.0227    0.9192          0.8000    0.1237

                How it ends
                                          ----------- probability of  ------------------ expected
                truth                     benefit  futility  no stop  looks  information   trials
                ---------------------------------------------------------------------------------
                without an effect          0.0227    0.9192   0.0581    2.6       0.5169   52,299
                  futility overruled       0.0250    0.0000   0.9750    5.0       0.9967  100,847
                with the smallest effect   0.8000    0.1237   0.0763    3.7       0.7405   76,536
                  futility overruled       0.8268    0.0000   0.1732    3.9       0.7898   81,628

                What the columns mean
                  look                      number of the look
                  information               share of the planned information that is in at that look
                  trials                    planned trials of all variants by then, with the smallest effect
                  alpha spent               chance of a false alarm up to and including that look, in the direction
                                            of benefit
                  upper z                   stop for benefit when the z-value of variant minus control is at or
                                            above it
                  lower z                   stop for harm when it is at or below it; - means no stop in that
                                            direction
                  futility z                a benefit has become unlikely when it is below it: advice to stop, not
                                            an obligation; none at the last look
                  one-look p                one-sided p-value of a z just at the boundary, as if this were the only
                                            look; smaller is stricter
                  difference in points      observed difference of the rates, in percentage points, at which the
                                            boundary is reached if the rates are about those planned
                  without an effect         if the variant is no better and no worse: every stop for benefit or harm
                                            is a false alarm
                  with the smallest effect  if the effect is the smallest worth finding: benefit in the last row is
                                            the power
                  no stop                   planned information used up without any stop
                  expected                  averages over many runs of this plan, at the end of a run; how many
                                            trials bring the same information depends on the rates, so that trials
                                            and looks need not rise together
                Looks may come at other moments than planned: the boundaries then follow the information that is in.
                All figures rest on the planned rates and the normal approximation. The plan's owner decides; not
                for clinical or safety decisions.
                """, String.join("\n", lines(PlannedPathTest.PLAN)) + "\n");
    }

    @Test
    void fitsATerminal() throws IOException {
        List<String> wide = lines(LONG, "--rates", "wide=0.123");
        wide.forEach(line -> assertTrue(line.length() <= BoundariesText.WIDTH, line));
        wide.forEach(line -> assertEquals(line.stripTrailing(), line));
    }

    @Test
    void leavesOutRowsOfLongPlansUnlessAsked() throws IOException {
        List<String> some = lines(LONG);
        assertTrue(some.contains(
                "When to stop (the first, the last and one in 2 of 28 looks; --all-looks or --json has all)"));
        assertEquals(3, rows(some, 4).size(), "a row in each table");
        assertEquals(3, rows(some, 28).size(), "a row in each table");
        assertEquals(0, rows(some, 5).size());
        List<String> all = lines(LONG, "--all-looks");
        assertEquals(3, rows(all, 5).size());
        assertTrue(all.contains("When to stop"));
    }

    @Test
    void saysWhatIsSpecialAboutAPlan() throws IOException {
        String text = String.join("\n", lines(LONG));
        assertTrue(text.contains("spending     benefit obrien-fleming; harm pocock, nothing before 0.1 of the clock"));
        assertTrue(text.contains("clock        calendar: "));
        assertTrue(text.contains("information  trials: "));
        assertTrue(text.contains("is below 0.1, if the effect seen"));
        assertTrue(text.contains("tall against plain: the same numbers as for wide."));
        assertTrue(text.contains("How 2 comparisons share alpha 0.05"));
        assertTrue(text.contains("- No benefit is declared in the first P7D; harm may stop at once."));
        assertTrue(text.contains("alpha spent on"));
        String different = String.join("\n", lines(LONG, "--rates", "wide=0.123"));
        assertFalse(different.contains("the same numbers as"), "tall has another rate");
        assertTrue(different.contains("under the given rates"));
    }

    private static List<String> rows(List<String> lines, int look) {
        return lines.stream().filter(line -> line.matches(look + " {2,}.*")).toList();
    }

    private List<String> lines(String plan, String... more) throws IOException {
        Path file = Files.writeString(directory.resolve("quay.yaml"), plan);
        List<String> arguments = new ArrayList<>(List.of("boundaries", "--plan", file.toString()));
        arguments.addAll(List.of(more));
        CommandRun run = CommandRun.of(arguments.toArray(String[]::new));
        assertEquals(List.of(), run.err());
        assertEquals(0, run.status());
        return run.out();
    }
}
