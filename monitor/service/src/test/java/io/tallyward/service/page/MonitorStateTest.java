package io.tallyward.service.page;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.event.RejectReason;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import io.tallyward.service.status.Northwater;
import io.tallyward.service.status.StatusBoard;
import java.time.Clock;
import java.time.ZoneOffset;
import java.util.Collection;
import java.util.List;
import java.util.Map;
import java.util.OptionalLong;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.EnumSource;

class MonitorStateTest {

    private static final MonitorState FINE = new MonitorState(List.of(), false, 0);
    private static final MonitorState UNKEYED = new MonitorState(List.of(), true, 0);
    private static final String BANNER =
            "<section class=\"banner problem\" role=\"alert\"><strong>The input topic is not"
                    + " keyed by unit: units are counted more than once and clicks miss their views. Do not act on any rate here."
                    + " Key the topic by unit and start anew.</strong></section>";

    private final Pages pages = new Pages(Clock.fixed(Northwater.START, ZoneOffset.UTC));
    private final Collection<ExperimentView> all = Northwater.all().values();
    private final ExperimentView one = Northwater.fareChip();

    @Test
    void addsUpWhatThePartitionsReport() {
        StatusBoard board = new StatusBoard();
        board.adoptCounts(0, report(Map.of(RejectReason.values()[0], 3L, RejectReason.values()[1], 4L), false));
        assertEquals(new MonitorState(List.of(), false, 7), MonitorState.of(List.of(), board.counts()));
        board.publishCounts(1, report(Map.of(RejectReason.values()[0], 5L), true));
        assertEquals(new MonitorState(List.of(), true, 12), MonitorState.of(List.of(), board.counts()));
        assertThrows(IllegalArgumentException.class, () -> new MonitorState(List.of(), false, -1));
    }

    @Test
    void warnsOfAnInputThatIsNotKeyedByUnit() {
        assertTrue(pages.overview(all, UNKEYED).contains(BANNER));
        assertTrue(pages.experiment(one, UNKEYED).contains(BANNER));
        assertFalse(pages.overview(all, FINE).contains("not keyed"));
        assertHeads(
                "Not keyed by unit", "1 experiment, input not keyed by unit: no rate to act on", List.of(one), UNKEYED);
        assertHeads("Not keyed by unit", "No experiment, and input not keyed by unit", List.of(), UNKEYED);
        assertTitle("Not keyed by unit · fare-chip", pages.experiment(one, UNKEYED));
    }

    @Test
    void isQuietWhenAllIsWell() {
        assertHeads("All quiet", "1 experiment, nothing needs attention", List.of(one), FINE);
        assertHeads("2 need attention", "2 of 6 experiments need attention", all, FINE);
        assertFalse(pages.overview(all, FINE).contains("class=\"banner problem\""));
        assertFalse(pages.overview(all, FINE).contains("class=\"banner starting\""));
    }

    @Test
    void isNotQuietAboutPlanFilesThatNeedAttention() {
        Health refused = new Health("plans", State.OK, "Not what stands and is counted by: quay-banner.", true);
        MonitorState noted = new MonitorState(List.of(refused), false, 0);

        assertHeads("Plan files need attention", "1 experiment, plan files need attention", List.of(one), noted);
        assertHeads("2 need attention", "2 of 6 experiments need attention", all, noted);
        assertTrue(pages.experiment(one, noted).contains("Not what stands and is counted by: quay-banner."));
        assertFalse(pages.experiment(one, noted).contains("class=\"banner problem\""));
    }

    @ParameterizedTest
    @EnumSource(
            value = State.class,
            names = {"STARTING", "DOWN", "BROKEN"})
    void saysInTitleAndHeadlineThatItIsNotAtWork(State state) {
        MonitorState ill = new MonitorState(List.of(check("count", State.OK), check("kafka", state)), false, 0);
        String headline = "Monitor not at work; ";
        assertHeads("Not at work", headline + "last known: 6 experiments, 2 need attention", all, ill);
        assertHeads("Not at work", headline + "last known: 1 experiment, nothing needs attention", List.of(one), ill);
        assertHeads("Not at work", headline + "no experiment is known", List.of(), ill);
        assertTitle("Not at work · fare-chip", pages.experiment(one, ill));
    }

    @Test
    void isNotQuietedByAnotherProblem() {
        MonitorState both = new MonitorState(List.of(check("kafka", State.DOWN)), true, 0);
        assertHeads(
                "Not at work",
                "Monitor not at work; last known: 1 experiment, input not keyed by unit: no rate to act on",
                List.of(one),
                both);
        assertTrue(pages.overview(all, both).contains(BANNER));
    }

    @Test
    void tellsStartingFromFailing() {
        String html = pages.experiment(
                one,
                new MonitorState(
                        List.of(
                                check("deciding", State.STARTING),
                                check("webhook", State.DOWN),
                                check("counting", State.BROKEN)),
                        false,
                        0));
        String label = "aria-label=\"State of the monitor itself\"";
        assertTrue(html.contains("<section class=\"banner problem\" " + label
                + "><strong>The monitor itself is not fully at work; what follows may be old.</strong><ul>"
                + "<li><b>webhook</b> (down): Invented detail.</li>"
                + "<li><b>counting</b> (broken): Invented detail.</li></ul></section>"));
        assertTrue(html.contains("<section class=\"banner starting\" " + label
                + "><strong>Starting: what follows may be old or incomplete.</strong><ul>"
                + "<li><b>deciding</b> (starting): Invented detail.</li></ul></section>"));
    }

    @Test
    void pointsElsewhereWithoutExperiments() {
        assertHeads("No experiment", "No experiment on this instance", List.of(), FINE);
        assertTrue(pages.overview(List.of(), FINE)
                .contains(
                        "<p>This instance decides about no experiment. Another instance may, or none is planned. Whether"
                                + " this one is at work is told at <a href=\"/health/ready\">/health/ready</a>.</p>"));
    }

    @Test
    void tellsOfRejectedRecords() {
        String line = "Rejected records since the first event: 1,204 (kept in the topic …-rejects with their reasons)";
        assertTrue(
                pages.overview(all, new MonitorState(List.of(), false, 1_204)).contains(line));
        assertFalse(pages.overview(all, FINE).contains("Rejected records"));
    }

    private void assertHeads(String title, String headline, Collection<ExperimentView> views, MonitorState monitor) {
        String html = pages.overview(views, monitor);
        assertTitle(title, html);
        assertTrue(html.contains("<h1>" + headline + "</h1>"), () -> html.replaceAll("(?s).*<h1>(.*?)</h1>.*", "$1"));
    }

    private static void assertTitle(String title, String html) {
        assertTrue(
                html.contains("<title>" + title + " · Tallyward</title>"),
                () -> html.replaceAll("(?s).*<title>(.*?)</title>.*", "$1"));
    }

    private static Health check(String name, State state) {
        return new Health(name, state, "Invented detail.");
    }

    private static CountReport report(Map<RejectReason, Long> rejected, boolean unkeyed) {
        return new CountReport(Map.of(), OptionalLong.empty(), rejected, 0, unkeyed);
    }
}
