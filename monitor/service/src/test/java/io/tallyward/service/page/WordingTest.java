package io.tallyward.service.page;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.status.Northwater;
import java.time.Clock;
import java.time.Duration;
import java.time.ZoneOffset;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;

class WordingTest {

    private static final MonitorState FINE = new MonitorState(List.of(), false, 0);

    private final Pages pages = new Pages(Clock.fixed(Northwater.START.plus(Duration.ofHours(136)), ZoneOffset.UTC));

    @ParameterizedTest
    @CsvSource({
        "STOP_BENEFIT, The benefit boundary was crossed",
        "STOP_HARM, The harm boundary was crossed",
        "STOP_FUTILITY, A benefit of the planned size has become unlikely",
        "EXHAUSTED, The planned information or time is used up without a crossing"
    })
    void saysWhatIsHeld(Verdict held, String found) {
        ExperimentView view = Northwater.with(
                Northwater.cabinUpsell(),
                Verdict.CONTINUE,
                Trust.MISMATCH,
                Map.of("inside", Verdict.CONTINUE),
                Map.of("inside", held));
        String expected = found + ", but the data are not trusted: the verdict is held, and told if trust returns.";
        assertTrue(pages.experiment(view, FINE).contains("<p>" + expected + "</p>"));
    }

    @Test
    void saysOfWhichVariantAVerdictIsHeld() {
        Map<String, Verdict> held = Map.of("map", Verdict.STOP_BENEFIT, "tour", Verdict.EXHAUSTED);
        ExperimentView view = Northwater.with(
                Northwater.deckMap(),
                Verdict.CONTINUE,
                Trust.LATE,
                Northwater.deckMap().verdicts(),
                held);
        assertTrue(
                pages.experiment(view, FINE)
                        .contains(
                                "<p>map: The benefit boundary was crossed, but the data are not trusted: the verdict is held,"
                                        + " and told if trust returns. tour: The planned information or time is used up without a"
                                        + " crossing, but the data are not trusted: the verdict is held, and told if trust returns.</p>"));
    }

    @Test
    void holdsNothingButFinalVerdicts() {
        assertThrows(IllegalArgumentException.class, () -> Wording.held(Verdict.CONTINUE));
        assertThrows(IllegalArgumentException.class, () -> Wording.held(Verdict.WAITING));
    }

    @Test
    void namesTheVariantsInWhatToDo() {
        assertEquals(
                "It can wait for the morning. The owner may end the experiment and keep wide.",
                Wording.action(Verdict.STOP_BENEFIT, List.of("wide")));
        assertEquals(
                "It can wait for the morning. The owner may end the experiment and keep map or tour.",
                Wording.action(Verdict.STOP_BENEFIT, List.of("map", "tour")));
        assertEquals(
                "Tell the owner now: stop showing first. Switching it off is the safe choice.",
                Wording.action(Verdict.STOP_HARM, List.of("first")));
        assertEquals(
                "Tell the owner now: stop showing map and tour. Switching them off is the safe choice.",
                Wording.action(Verdict.STOP_HARM, List.of("map", "tour")));
        assertEquals(
                "It can wait for the morning. The owner decides whether the rest of the run is worth its time for chip.",
                Wording.action(Verdict.STOP_FUTILITY, List.of("chip")));
        assertEquals(Wording.of(Verdict.CONTINUE).action(), Wording.action(Verdict.CONTINUE, List.of("chip")));
    }

    @Test
    void showsThoseNamesOnBothPages() {
        ExperimentView view = Northwater.returnPrompt();
        String expected = "Tell the owner now: stop showing first. Switching it off is the safe choice.";
        assertTrue(pages.experiment(view, FINE).contains(expected));
        assertTrue(pages.overview(List.of(view), FINE).contains(expected));
    }

    @Test
    void doesNotHideHarmBehindABenefit() {
        Map<String, Verdict> verdicts = Map.of("map", Verdict.STOP_BENEFIT, "tour", Verdict.STOP_HARM);
        ExperimentView view =
                Northwater.with(Northwater.deckMap(), Verdict.STOP_BENEFIT, Trust.SOUND, verdicts, Map.of());
        assertTrue(pages.experiment(view, FINE)
                .contains("Tell the owner now: stop showing tour. Switching it off is the safe choice. It can wait for"
                        + " the morning. The owner may end the experiment and keep map."));
    }

    @Test
    void namesTheSideOfABoundary() {
        List<Comparison> looks = Northwater.quayBanner().history().stream()
                .map(ExperimentView.LookPoint::comparison)
                .toList();
        assertEquals("lower −7.04, no upper", ZStrip.boundaries(looks.get(0)));
        assertEquals("lower −2.12, upper 2.12", ZStrip.boundaries(looks.get(10)));
    }

    @Test
    void tellsSharesFromPlannedShares() {
        String html = pages.overview(List.of(Northwater.quayBanner()), FINE);
        assertTrue(html.contains("plain 50.03 % (planned 50.00 %) · wide 49.97 % (planned 50.00 %)"));
    }
}
