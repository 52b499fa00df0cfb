package io.tallyward.engine.count;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.engine.Events;
import io.tallyward.engine.Plans;
import io.tallyward.engine.count.WindowTally.Cell;
import io.tallyward.engine.count.WindowTally.SegmentCell;
import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.plan.Plan;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;

/** The rules of counting by view, case by case. Windows of 5 minutes, attribution 30, grace 10. */
class CountByViewTest {

    private static final String BANNER = "quay-banner";
    private static final Plan PLAN =
            Plans.plan(BANNER).byView().atMost(Duration.ofHours(6)).build();

    private final CountHost host = CountHost.of(PLAN);

    private static Event view(String variant, String unit, String id, double minute) {
        return Events.view(BANNER, variant, unit, id, minute);
    }

    private static Event click(String variant, String unit, String viewId, double minute) {
        return new Event(
                EventKind.CLICK,
                BANNER,
                variant,
                unit,
                "other-source",
                "c" + minute,
                Events.at(minute),
                viewId,
                Map.of());
    }

    private List<Cell> cells() {
        return host.tallies().stream()
                .flatMap(update -> update.windows().stream())
                .flatMap(window -> window.cells().stream())
                .toList();
    }

    private OutcomeCounts outcomes() {
        return host.outcomes(BANNER);
    }

    private static OutcomeCounts outcomes(Outcome... each) {
        OutcomeCounts.Builder builder = new OutcomeCounts.Builder();
        for (Outcome outcome : each) {
            builder.add(outcome, 1);
        }
        return builder.build();
    }

    @Test
    void countsEveryViewOfAUnitAndItsSquares() {
        host.feed(
                        view("wide", "ada", "a", 1),
                        view("wide", "ada", "b", 2),
                        view("wide", "ben", "c", 3),
                        click("wide", "ada", "b", 4),
                        view("wide", "ada", "d", 6))
                .end();
        assertEquals(List.of(new Cell(0, 1, 2, 3, 1, 5, 2, 1), new Cell(0, 1, 0, 1, 0, 5, 1, 0)), cells());
    }

    @Test
    void givesAClickThatNamesNoViewToTheLatestOne() {
        host.feed(
                        view("wide", "ada", "a", 1),
                        view("wide", "ada", "b", 7),
                        click("wide", "ada", "", 8),
                        click("wide", "ada", "", 6))
                .end();
        assertEquals(List.of(new Cell(0, 1, 1, 1, 1, 1, 1, 1), new Cell(0, 1, 0, 1, 1, 3, 3, 3)), cells());
    }

    @Test
    void letsALaterViewTakeAClickAwayUntilTheWindowOfTheEarlierIsSealed() {
        host.feed(view("wide", "ada", "a", 4), click("wide", "ada", "", 20), view("wide", "ada", "b", 19))
                .end();
        assertEquals(List.of(new Cell(0, 1, 1, 1, 0, 1, 0, 0), new Cell(0, 1, 0, 1, 1, 3, 2, 1)), cells());
    }

    @Test
    void countsACopyOnce() {
        host.feed(view("wide", "ada", "a", 1), view("wide", "ada", "a", 1), view("wide", "ada", "a", 1))
                .end();
        assertEquals(List.of(Cell.ofUnits(0, 1, 1, 0)), cells());
        assertEquals(outcomes(Outcome.TRIAL, Outcome.DUPLICATE, Outcome.DUPLICATE), outcomes());
    }

    @Test
    void takesTheEarliestOfCopiesThatDisagreeInWhateverOrderTheyCome() {
        host.feed(view("wide", "ada", "a", 8), view("wide", "ada", "a", 3)).end();
        CountHost other = CountHost.of(PLAN)
                .feed(view("wide", "ada", "a", 3), view("wide", "ada", "a", 8))
                .end();
        assertEquals(1, host.tallies().get(0).windows().size());
        assertEquals(host.tallies(), other.tallies());
        assertEquals(outcomes(), other.outcomes(BANNER));
    }

    @Test
    void tellsTheSameIdFromTwoSourcesApart() {
        Event elsewhere =
                new Event(EventKind.VIEW, BANNER, "wide", "ada", "northwater-app", "a", Events.at(1), "", Map.of());
        host.feed(view("wide", "ada", "a", 1), elsewhere).end();
        assertEquals(List.of(new Cell(0, 1, 1, 2, 0, 4, 0, 0)), cells());
    }

    @Test
    void countsAViewUnderAnotherVariantThanTheFirstAsCrossover() {
        host.feed(
                        view("plain", "ada", "b", 2),
                        view("wide", "ada", "a", 1),
                        click("plain", "ada", "b", 3),
                        click("wide", "ada", "", 3))
                .end();
        assertEquals(List.of(Cell.ofUnits(0, 1, 1, 1)), cells());
        assertEquals(outcomes(Outcome.TRIAL, Outcome.CROSSOVER, Outcome.CROSSOVER, Outcome.SUCCESS), outcomes());
    }

    @Test
    void keepsTheVariantOfAUnitWhoseFirstViewIsSealed() {
        host.feed(view("wide", "ada", "a", 1), view("plain", "ben", "b", 90), view("plain", "ada", "c", 91))
                .end();
        assertEquals(outcomes(Outcome.TRIAL, Outcome.TRIAL, Outcome.CROSSOVER), outcomes());
    }

    @Test
    void takesAClickUpToTheAttributionAndNotAMillisecondLater() {
        host.feed(view("wide", "ada", "a", 1), view("wide", "ben", "b", 1));
        host.feed(click("wide", "ada", "a", 31), click("wide", "ben", "b", 31 + 1.0 / 60_000))
                .end();
        assertEquals(outcomes(Outcome.TRIAL, Outcome.TRIAL, Outcome.SUCCESS, Outcome.EXPIRED), outcomes());
    }

    @Test
    void callsAViewLateOnceTheGraceAfterItsWindowIsOver() {
        host.feed(view("wide", "ben", "b", 14.9), view("wide", "ada", "a", 4), view("wide", "ben", "c", 15));
        host.feed(view("wide", "cy", "d", 4)).end();
        assertEquals(outcomes(Outcome.TRIAL, Outcome.TRIAL, Outcome.TRIAL, Outcome.LATE), outcomes());
    }

    @Test
    void callsAClickThatCameAfterTheSealingOfItsViewLate() {
        host.feed(view("wide", "ada", "a", 1), view("wide", "ben", "b", 45), click("wide", "ada", "a", 20))
                .end();
        assertEquals(outcomes(Outcome.TRIAL, Outcome.TRIAL, Outcome.LATE), outcomes());
    }

    @Test
    void callsAClickWhoseViewNeverCameAnOrphan() {
        host.feed(click("wide", "ada", "a", 1), view("wide", "ben", "b", 2), click("wide", "ben", "no-such-view", 3))
                .end();
        assertEquals(
                new OutcomeCounts.Builder()
                        .add(outcomes(Outcome.TRIAL, Outcome.ORPHAN, Outcome.ORPHAN))
                        .addOrphans(1, 2)
                        .build(),
                outcomes());
    }

    @Test
    void countsAUnitOnceUnderTheSegmentOfItsFirstView() {
        Plan traced = Plans.plan(BANNER)
                .byView()
                .segments("platform")
                .atMost(Duration.ofHours(6))
                .build();
        CountHost tracing = CountHost.of(traced)
                .feed(
                        on("web", view("wide", "ada", "b", 3)),
                        on("app", view("wide", "ada", "a", 1)),
                        on("web", view("wide", "ada", "c", 7)),
                        on("web", view("plain", "ben", "d", 8)))
                .end();
        assertEquals(
                List.of(new SegmentCell("platform", "app", 0, 1, 1), new SegmentCell("platform", "web", 0, 0, 1)),
                tracing.tallies().stream()
                        .flatMap(update -> update.windows().stream())
                        .flatMap(window -> window.segments().stream())
                        .toList());
    }

    private static Event on(String platform, Event view) {
        return new Event(
                view.kind(),
                view.experiment(),
                view.variant(),
                view.unit(),
                view.source(),
                view.id(),
                view.atMillis(),
                view.viewId(),
                Map.of("platform", platform));
    }

    @Test
    void keepsNoMoreOfAUnitThanItsBound() {
        int views = 5_000;
        for (int i = 0; i < views; i++) {
            host.feed(view("wide", "ada", "v" + i, 1));
        }
        host.end();
        assertEquals(ViewedUnit.MOST_EVENTS, outcomes().get(Outcome.TRIAL));
        assertEquals(views - ViewedUnit.MOST_EVENTS, outcomes().get(Outcome.REPEAT));
    }

    @Test
    void countsMoreCopiesThanItKeepsCountOf() {
        int copies = 3 * ViewedUnits.MOST_COPIES;
        for (int i = 0; i < copies; i++) {
            host.feed(view("wide", "ada", "a", 1));
        }
        host.end();
        assertEquals(1, outcomes().get(Outcome.TRIAL));
        assertEquals(copies - 1, outcomes().get(Outcome.DUPLICATE));
    }
}
