package io.tallyward.service.plan;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertInstanceOf;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanBook.Ruling;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.ListType;
import io.tallyward.service.config.document.MapType;
import io.tallyward.service.config.document.Shape;
import io.tallyward.service.config.document.ValueType;
import java.time.Instant;
import java.util.Set;
import java.util.TreeSet;
import java.util.stream.Collectors;
import java.util.stream.Stream;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;
import org.junit.jupiter.params.provider.MethodSource;

/**
 * What becomes of a change of each key of a plan: until the first event is counted it is taken, from then on it is refused with
 * the key, what it is and what it would be. Looks make no difference: a plan is frozen before its first look.
 */
class PlanChangeTest {

    private static final Instant NOW = Instant.parse("2026-05-05T00:00:00Z");

    private static final String PLAN = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            count: {by: unit, attribution: PT30M, grace: PT10M, window: PT5M}
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.25, control: false}, tall: {share: 0.25}}
            better: higher
            test: {alpha: 0.05, sides: two, power: 0.8, baseline: 0.12, smallest-effect: 0.006, spending: obrien-fleming,
              benefit: {alpha: 0.025, spending: pocock, silent-before: 0.1}, harm: {alpha: 0.025, spending: pocock},
              alpha-sharing: pass-on, clock: information, information: observed, minimum-per-cell: 5}
            looks: {every: PT6H}
            futility: {spending: {hwang-shih-decani: -2}}
            split-check: {alpha: 0.001, segments: [platform]}
            trust: {crossover-share: 0.02, late-share: 0.02, starved-after: PT6H}
            run: {from: 2026-05-04T00:00:00Z, at-least: P7D, at-most: P28D}
            epochs:
              - {from: 2026-05-04T06:00:00Z, shares: {plain: 0.4, wide: 0.3, tall: 0.3}}
            """;

    /** The key, what is written now, what is written then, and the term that a refusal names. */
    static Stream<Change> changes() {
        return Stream.of(
                new Change("question", "does the wide", "does the tall", "question"),
                new Change("owner", "web-growth@", "timetables@", "owner"),
                new Change("count.by", "by: unit", "by: view", "count.by"),
                new Change("count.attribution", "attribution: PT30M", "attribution: PT40M", "count.attribution"),
                new Change("count.grace", "grace: PT10M", "grace: PT20M", "count.grace"),
                new Change("count.window", "window: PT5M", "window: PT10M", "count.window"),
                new Change("variants", "tall: {", "long: {", "variants"),
                new Change(
                        "variants.*.share",
                        "wide: {share: 0.25",
                        "wide: {share: 0.250000000001",
                        "variants.wide.share"),
                new Change(
                        "variants.*.control",
                        "control: true}, wide: {share: 0.25, control: false}",
                        "control: false}, wide: {share: 0.25, control: true}",
                        "variants.plain.control"),
                new Change("better", "better: higher", "better: lower", "better"),
                new Change("test.alpha", "alpha: 0.05", "alpha: 0.06", "test.benefit.alpha"),
                new Change("test.sides", "sides: two", "sides: one", "test.sides"),
                new Change("test.power", "power: 0.8", "power: 0.9", "test.power"),
                new Change("test.baseline", "baseline: 0.12", "baseline: 0.13", "test.baseline"),
                new Change("test.smallest-effect", "effect: 0.006", "effect: 0.007", "test.smallest-effect"),
                new Change(
                        "test.spending",
                        "spending: obrien-fleming",
                        "spending: {kim-demets: 3}",
                        "test.benefit.spending"),
                new Change(
                        "test.benefit.alpha", "benefit: {alpha: 0.025", "benefit: {alpha: 0.03", "test.benefit.alpha"),
                new Change(
                        "test.benefit.spending",
                        "alpha: 0.025, spending: pocock, silent",
                        "alpha: 0.025, spending: obrien-fleming, silent",
                        "test.benefit.spending"),
                new Change(
                        "test.benefit.silent-before",
                        "silent-before: 0.1",
                        "silent-before: 0.2",
                        "test.benefit.silent-before"),
                new Change("test.harm.alpha", "harm: {alpha: 0.025", "harm: {alpha: 0.02", "test.harm.alpha"),
                new Change(
                        "test.harm.spending",
                        "harm: {alpha: 0.025, spending: pocock",
                        "harm: {alpha: 0.025, spending: obrien-fleming",
                        "test.harm.spending"),
                new Change(
                        "test.harm.silent-before",
                        "harm: {alpha: 0.025,",
                        "harm: {alpha: 0.025, silent-before: 0.1,",
                        "test.harm.silent-before"),
                new Change("test.alpha-sharing", "sharing: pass-on", "sharing: split", "test.alpha-sharing"),
                new Change("test.clock", "clock: information", "clock: calendar", "test.clock"),
                new Change("test.information", "information: observed", "information: trials", "test.information"),
                new Change("test.minimum-per-cell", "per-cell: 5", "per-cell: 6", "test.minimum-per-cell"),
                new Change("looks.every", "every: PT6H", "every: PT12H", "looks.every"),
                new Change("looks.fractions", "every: PT6H", "fractions: [0.5, 1]", "looks.every"),
                new Change("futility.spending", "decani: -2", "decani: -3", "futility"),
                new Change(
                        "futility.conditional-power",
                        "spending: {hwang-shih-decani: -2}",
                        "conditional-power: 0.1",
                        "futility"),
                new Change(
                        "futility.under",
                        "spending: {hwang-shih-decani: -2}",
                        "conditional-power: 0.1, under: trend",
                        "futility"),
                new Change(
                        "futility.predictive-power",
                        "spending: {hwang-shih-decani: -2}",
                        "predictive-power: 0.1",
                        "futility"),
                new Change("split-check.alpha", "{alpha: 0.001", "{alpha: 0.002", "split-check.alpha"),
                new Change("split-check.segments", "[platform]", "[platform, version]", "split-check.segments"),
                new Change(
                        "trust.crossover-share",
                        "crossover-share: 0.02",
                        "crossover-share: 0.03",
                        "trust.crossover-share"),
                new Change("trust.late-share", "late-share: 0.02", "late-share: 0.03", "trust.late-share"),
                new Change(
                        "trust.orphan-gap",
                        "late-share: 0.02,",
                        "late-share: 0.02, orphan-gap: 0.1,",
                        "trust.orphan-gap"),
                new Change("trust.starved-after", "after: PT6H", "after: PT7H", "trust.starved-after"),
                new Change("run.from", "from: 2026-05-04T00:00:00Z", "from: 2026-05-04T00:05:00Z", "run.from"),
                new Change("run.at-least", "at-least: P7D", "at-least: P14D", "run.at-least"),
                new Change("run.whole-weeks", "at-least: P7D", "at-least: P8D, whole-weeks: true", "run.at-least"),
                new Change("run.at-most", "at-most: P28D", "at-most: P35D", "run.at-most"),
                new Change("epochs[].from", "from: 2026-05-04T06", "from: 2026-05-04T07", "epochs"),
                new Change("epochs[].shares", "wide: 0.3, tall: 0.3", "wide: 0.2, tall: 0.4", "epochs"));
    }

    record Change(String key, String written, String changed, String term) {
        Plan plan() {
            String text = PLAN;
            if (key.equals("test.spending")) {
                text = text.replace("spending: pocock, silent", "silent");
            } else if (key.equals("test.alpha")) {
                text = text.replace("benefit: {alpha: 0.025", "benefit: {alpha: 0.035");
            } else if (key.equals("test.benefit.alpha")) {
                text = text.replace("harm: {alpha: 0.025", "harm: {alpha: 0.02");
            } else if (key.equals("test.harm.alpha")) {
                text = text.replace("benefit: {alpha: 0.025", "benefit: {alpha: 0.03");
            } else if (key.equals("test.sides")) {
                text = text.replaceAll("benefit: [^}]*}, harm: [^}]*},", "");
            } else if (key.equals("variants")) {
                text = text.replace("tall: 0.3", "long: 0.3");
            }
            assertTrue(text.contains(written), "what is changed must be there: " + key);
            return read(text.replace(written, changed));
        }

        @Override
        public String toString() {
            return key;
        }
    }

    private static Plan read(String text) {
        return PlanReader.parse("plan.yaml", text)
                .value()
                .orElseThrow(() -> new AssertionError(
                        PlanReader.parse("plan.yaml", text).problems().toString()));
    }

    private static PlanBook book(boolean frozen) {
        PlanBook book = new PlanBook();
        book.propose(read(PLAN), NOW);
        if (frozen) {
            book.freeze("quay-banner");
        }
        return book;
    }

    @ParameterizedTest
    @MethodSource("changes")
    void aChangeIsTakenBeforeTheFirstEventAndRefusedAfterIt(Change change) {
        Plan changed = change.plan();
        assertNotEquals(PlanDigest.of(read(PLAN)), PlanDigest.of(changed));

        assertInstanceOf(Ruling.Adopted.class, book(false).propose(changed, NOW));

        PlanBook book = book(true);
        Ruling.Refused refused = assertInstanceOf(Ruling.Refused.class, book.propose(changed, NOW));
        assertTrue(refused.reason().contains(change.term() + " is "), refused.reason());
        assertEquals(read(PLAN), book.entries().get("quay-banner").plan());
    }

    @ParameterizedTest
    @CsvSource(
            delimiter = '|',
            value = {
                "end: 2026-06-08T00:00:00Z",
                "shares: {plain: 0.2; wide: 0.4; tall: 0.4}",
                "stop: true",
            })
    void whatMayBeAmendedIsTakenAfterTheFirstEvent(String change) {
        Plan amended = read(PLAN + "amendments:\n  - {at: 2026-05-05T00:00:00Z, reason: the timetable changes, "
                + change.replace(';', ',') + "}\n");

        assertInstanceOf(Ruling.Amended.class, book(true).propose(amended, NOW));
        assertInstanceOf(Ruling.Refused.class, book(true).propose(amended, NOW.plusMillis(1)), "too late");
    }

    @Test
    void wholeWeeksThatTheMinimumHasAlreadyAreNoChange() {
        Plan other = read(PLAN.replace("at-least: P7D", "at-least: P3D, whole-weeks: true"));

        assertInstanceOf(Ruling.Unchanged.class, book(true).propose(other, NOW));
    }

    @Test
    void layoutCommentsAndWrittenDefaultsAreNoChange() {
        Plan other = read("# for the summer\n"
                + PLAN.replace("better: higher\n", "")
                        .replace("PT30M", "PT1800S")
                        .replace("{plain: 0.4, wide: 0.3, tall: 0.3}", "{tall: 0.3, plain: 0.4, wide: 0.30}"));

        assertInstanceOf(Ruling.Unchanged.class, book(true).propose(other, NOW));
    }

    /** The experiment's name is what a plan is found by; amendments have tests of their own. */
    @Test
    void everyKeyOfAPlanIsInTheTable() {
        Set<String> keys = new TreeSet<>();
        collect("", PlanKeys.SHAPE, keys);
        keys.removeIf(key -> key.equals("experiment") || key.startsWith("amendments"));

        assertEquals(
                keys,
                changes()
                        .map(Change::key)
                        .filter(key -> !key.equals("variants"))
                        .collect(Collectors.toCollection(TreeSet::new)));
    }

    private static void collect(String prefix, Shape shape, Set<String> keys) {
        for (Key<?> key : shape.keys()) {
            collect(prefix + key.name(), key.type(), keys);
        }
    }

    private static void collect(String path, ValueType<?> type, Set<String> keys) {
        if (type instanceof Shape section) {
            collect(path + ".", section, keys);
        } else if (type instanceof MapType<?> map && map.value() instanceof Shape) {
            collect(path + ".*", map.value(), keys);
        } else if (type instanceof ListType<?> list && list.item() instanceof Shape) {
            collect(path + "[]", list.item(), keys);
        } else {
            keys.add(path);
        }
    }
}
