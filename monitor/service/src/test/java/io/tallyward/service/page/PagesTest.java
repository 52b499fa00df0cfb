package io.tallyward.service.page;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import io.tallyward.service.status.Northwater;
import java.io.IOException;
import java.io.StringReader;
import java.time.Clock;
import java.time.Duration;
import java.time.ZoneOffset;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.stream.IntStream;
import javax.xml.parsers.DocumentBuilderFactory;
import javax.xml.parsers.ParserConfigurationException;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.EnumSource;
import org.w3c.dom.Document;
import org.w3c.dom.Element;
import org.w3c.dom.NodeList;
import org.xml.sax.InputSource;
import org.xml.sax.SAXException;

/** Oracle for well-formedness and escaping: the XML parser of the JDK, which reads back what was written. */
class PagesTest {

    private static final String NASTY = "<script>alert('1')</script> & \"quotes\" ]]> \u0001 é";

    private static final MonitorState FINE = new MonitorState(List.of(), false, 0);

    private final Pages pages = new Pages(Clock.fixed(Northwater.START.plus(Duration.ofHours(136)), ZoneOffset.UTC));

    @Test
    void isWellFormedForEverySituation() {
        parse(pages.overview(Northwater.all().values(), FINE));
        parse(pages.overview(List.of(), ill(State.DOWN)));
        parse(pages.notFound());
        Northwater.all().values().forEach(view -> parse(pages.experiment(view, FINE)));
    }

    @Test
    void speaksOfViewsWhereViewsAreCounted() {
        String text = parse(pages.experiment(Northwater.boardNews(), FINE))
                .getDocumentElement()
                .getTextContent();
        for (String word : List.of(
                "Units",
                "Views",
                "Clicked views",
                "Design effect",
                "by view, clicks within",
                "variance between units seen")) {
            assertTrue(text.contains(word), word);
        }
        assertTrue(text.contains("14,020"), "units");
        assertTrue(text.contains("61,240"), "views");
        assertTrue(text.contains("Taken for independent, z would be"), text);
        assertFalse(text.contains("Wilson"));
        // By hand: variance 1.0000713 (15000 - 2 R 64000 + R^2 520000) / 61240^2 with R = 7402 / 61240.
        assertTrue(text.replace('\u00a0', ' ').contains("11.82 % to 12.36 %"), text);
        String units = parse(pages.experiment(Northwater.fareChip(), FINE))
                .getDocumentElement()
                .getTextContent();
        assertFalse(units.contains("Design effect") || units.contains("Clicked views"));
        parse(pages.overview(List.of(Northwater.boardNews()), FINE));
    }

    @Test
    void escapesWhateverComesFromOutside() {
        ExperimentView view = nasty();
        MonitorState monitor = new MonitorState(List.of(new Health(NASTY, State.DOWN, NASTY)), true, 1);
        for (String html : List.of(pages.overview(List.of(view), monitor), pages.experiment(view, monitor))) {
            assertFalse(html.contains("<script>"));
            Document page = parse(html);
            assertEquals(1, page.getElementsByTagName("script").getLength(), "the page's own");
            assertTrue(page.getDocumentElement().getTextContent().contains("<script>alert('1')</script> & \"quotes\""));
        }
    }

    @Test
    void needsNothingInlineAndNothingFromElsewhere() {
        for (ExperimentView view : Northwater.all().values()) {
            NodeList elements = parse(pages.experiment(view, FINE)).getElementsByTagName("*");
            for (int i = 0; i < elements.getLength(); i++) {
                Element element = (Element) elements.item(i);
                for (int a = 0; a < element.getAttributes().getLength(); a++) {
                    String name = element.getAttributes().item(a).getNodeName();
                    String value = element.getAttributes().item(a).getNodeValue();
                    assertFalse(name.equals("style") || name.startsWith("on"), name);
                    assertFalse(value.contains("//"), name + "=" + value);
                }
                assertFalse(element.getTagName().equals("style"));
            }
        }
    }

    @Test
    void saysWhereAMismatchComesFrom() {
        String text = text(Northwater.cabinUpsell());
        assertTrue(text.contains("between 2026-05-05 08:00 UTC and 2026-05-05 08:20 UTC"), text);
        assertTrue(text.contains("platform app of 5 segments"), text);
        assertTrue(text.contains("other than platform app"), text);
        assertFalse(text(Northwater.fareChip()).contains("Mismatch began"));
    }

    @Test
    void putsProblemsFirst() {
        String html = pages.overview(Northwater.all().values(), FINE);
        List<Integer> places = List.of("return-prompt", "cabin-upsell", "quay-banner", "fare-chip", "pier-map").stream()
                .map(name -> html.indexOf(">" + name + "<"))
                .toList();
        assertEquals(places.stream().sorted().toList(), places);
        assertTrue(html.contains("2 of 6 experiments need attention"));
    }

    @ParameterizedTest
    @EnumSource(Verdict.class)
    void saysWhatAVerdictMeansAndWhatToDo(Verdict verdict) {
        String text = text(Northwater.with(Northwater.fareChip(), verdict, Trust.SOUND));
        assertTrue(text.contains("Verdict: " + Wording.of(verdict).label()));
        assertTrue(text.contains(Wording.of(verdict).meaning()));
        assertTrue(text.contains(Wording.of(verdict).action()));
    }

    @ParameterizedTest
    @EnumSource(Trust.class)
    void saysWhatTrustMeansAndWhatToDo(Trust trust) {
        String text = text(Northwater.with(Northwater.fareChip(), Verdict.CONTINUE, trust));
        assertTrue(text.contains("Trust: " + Wording.of(trust).label()));
        assertTrue(text.contains(Wording.of(trust).meaning()));
        assertTrue(text.contains(Wording.of(trust).action()));
        if (trust != Trust.SOUND) {
            assertTrue(text.contains("Invented reason for " + trust.code()));
            assertTrue(text.indexOf("Trust: ") < text.indexOf("Verdict: "), "what matters comes first");
            assertFalse(text.contains("Let it run."), "no advice from numbers that are not trusted");
        }
    }

    @Test
    void showsAHeldVerdictAsHeld() {
        String text = text(Northwater.cabinUpsell());
        assertTrue(text.contains("a verdict is held"));
        assertTrue(text.contains("Held until trust returns: Stop: benefit."));
    }

    @Test
    void comparesSharesWithThePlanOfTheirEpoch() {
        String text = text(Northwater.deckMap());
        assertTrue(text.contains("Shares against the plan, allocation epoch 0"));
        assertTrue(text.contains("Shares against the plan, allocation epoch 1"));
        assertTrue(text.contains("80.06 %80.00 %+0.06"), text);
        assertTrue(text.contains("33.96 %34.00 %−0.04"), text);
    }

    @Test
    void inventsNoNumberBeforeTheFirstLook() {
        String text = text(Northwater.pierMap());
        assertTrue(text.contains("No look has been taken yet."));
        assertFalse(text.contains("NaN"));
        assertFalse(text.contains("Infinity"));
        assertFalse(text.contains("null"));
    }

    @Test
    void cautions() {
        assertTrue(pages.notFound().contains("Not for clinical or safety decisions"));
        assertTrue(pages.notFound().contains("the plan's owner decides"));
    }

    @Test
    void refusesToEndWithOpenElements() {
        assertThrows(IllegalStateException.class, () -> new Markup().open("p").document());
    }

    @Test
    void putsEveryReasonOnARowOfItsOwn() {
        Document page = parse(pages.experiment(Northwater.returnPrompt(), FINE));
        NodeList rows = page.getElementsByTagName("tr");
        List<String> reasons = IntStream.range(0, rows.getLength())
                .mapToObj(i -> (Element) rows.item(i))
                .filter(row -> row.getAttribute("class").equals("remark"))
                .map(Element::getTextContent)
                .toList();
        assertEquals(5, reasons.size());
        assertEquals("Why: z −3.900 has reached the boundary", reasons.get(0));
    }

    @Test
    void showsHarmOnlyWhereItHasABoundary() {
        ExperimentView view = Northwater.fareChip();
        Comparison look = view.comparisons().get("chip");
        assertTrue(chart(look, true).contains(">harm<"), "below");
        assertTrue(chart(look, false).contains(">harm<"), "above");
        assertFalse(chart(bounded(look, 2.5, null), true).contains("harm"));
        assertFalse(chart(bounded(look, null, -2.5), false).contains("harm"));
        assertTrue(chart(bounded(look, null, -2.5), false).contains(">benefit<"));
    }

    /** The figures are those of the fixture, +0.603 and +0.634 points, as a page writes them. */
    @Test
    void showsTheAdjustedEstimateBesideTheNaiveOne() {
        String text = text(Northwater.quayBanner());
        String adjusted = "Effect, adjusted for the looks taken+0.60 points, 95\u00a0% interval +0.25 to +1.01;"
                + " relative to the control +5.07\u00a0%, +1.90\u00a0% to +8.87\u00a0%; p-value 0.012";
        String naive = "Difference as observed, naive+0.63 points, +5.28\u00a0% of the control's rate;";
        assertTrue(text.contains(adjusted), text);
        assertTrue(text.contains(naive), text);
        assertTrue(text.indexOf(adjusted) < text.indexOf(naive), "what may be quoted comes first");
        assertFalse(text.contains("Outlook"));
        assertTrue(
                text(Northwater.cabinUpsell()).contains("adjusted for the looks taken, if the data could be trusted+"));
        assertTrue(text(Northwater.cabinUpsell())
                .contains("Not adjusted: a stop picks a moment at which it looks large."));
    }

    @Test
    void showsTheOutlookWhileGoingOn() {
        String text = text(Northwater.fareChip());
        assertFalse(text.contains("adjusted for the looks taken+"));
        assertTrue(text.contains("Difference so far, naive−0.05 points"), text);
        assertTrue(
                text.contains(
                        "OutlookChance to find a benefit at the planned end 42 % if the effect seen so far goes on,"
                                + " 81 % if it is the smallest worth finding, 3 % if there is none; 39 % averaged over what the data say."));
        assertFalse(
                text(Northwater.with(Northwater.fareChip(), Verdict.CONTINUE, Trust.LATE))
                        .contains("Outlook"),
                "no outlook from data that are not trusted");
    }

    @Test
    void showsALevelThatWasPassedOn() {
        assertTrue(text(Northwater.deckMapPassedOn()).contains("Level in force0.05, raised from 0.025:"));
        assertFalse(text(Northwater.deckMap()).contains("Level in force"));
        assertFalse(text(Northwater.quayBanner()).contains("Level in force"));
    }

    @Test
    void tellsThatSomeHaveTheirVerdictWhileOthersGoOn() {
        String text = text(Northwater.deckMapPassedOn());
        assertTrue(text.contains("The verdict on map is reached; no boundary was crossed by the others, which go on."));
        assertTrue(text.contains("The owner may end the experiment and keep map. Let the others run."));
        assertFalse(text.contains("neither a benefit nor a harm is established"));
    }

    @Test
    void leavesEndsOpenThatAreOpen() {
        assertEquals("1 to 2", EffectFacts.ends("1", "2"));
        assertEquals("2 or less", EffectFacts.ends(null, "2"));
        assertEquals("1 or more", EffectFacts.ends("1", null));
        assertEquals(Figures.NONE, EffectFacts.ends(null, null));
    }

    @Test
    void showsWhatThePlanHasOfItsOwn() throws BadInputException {
        Plan plan = PlanReader.parse("deck.yaml", """
                        experiment: deck-map
                        question: which deck map helps people to choose a seat?
                        owner: web-growth@northwater.example
                        better: lower
                        variants: {list: {share: 0.4, control: true}, map: {share: 0.3}, tour: {share: 0.3}}
                        test:
                          alpha: 0.05
                          baseline: 0.12
                          smallest-effect: {relative: 0.1}
                          alpha-sharing: split
                          clock: calendar
                          information: trials
                          benefit: {alpha: 0.02, spending: pocock, silent-before: 0.25}
                        looks: {fractions: [0.5, 1]}
                        futility: {predictive-power: 0.1}
                        run: {from: 2026-05-04T00:00:00Z, at-most: P28D}
                        """).orElseThrow();
        Markup html = new Markup();
        PlanSection.write(html, new Standing(Northwater.waiting(plan)));
        String text = parse(html.document()).getDocumentElement().getTextContent();
        for (String expected : List.of(
                "Testtwo-sided, alpha 0.05, power 0.8",
                "Benefitalpha 0.02, spending pocock, nothing before 0.25 of the clock",
                "Harmalpha 0.03, spending obrien-fleming",
                "Several variantsshare alpha evenly and for good",
                "Spending clockcalendar: error is spent as the longest run passes",
                "Measure of informationtrials: as if the success rates were those of the plan",
                "averaged over what the data say, is below 0.1; advice only",
                "a difference of −1.20 points from a rate of 12.00 %; lower is better",
                "at information 50 %, 100 %")) {
            assertTrue(text.contains(expected), expected + " in " + text);
        }
        assertTrue(text(Northwater.pierMap()).contains("Harmalpha 0.025, spending obrien-fleming"));
    }

    private static String chart(Comparison look, boolean higherIsBetter) {
        Markup html = new Markup();
        PathChart.draw(html, List.of(look), higherIsBetter);
        return html.document();
    }

    private static Comparison bounded(Comparison look, Double upper, Double lower) {
        return new Comparison(
                look.variant(),
                look.look(),
                look.z(),
                look.information(),
                look.informationFraction(),
                look.spendingTime(),
                look.level(),
                look.alphaSpent(),
                upper,
                lower,
                look.futility(),
                look.difference(),
                look.differenceLower(),
                look.differenceUpper(),
                look.lift(),
                look.outlook(),
                look.adjusted(),
                look.verdict(),
                look.held(),
                look.reason());
    }

    private static MonitorState ill(State state) {
        return new MonitorState(List.of(new Health("kafka", state, "No broker answers.")), false, 0);
    }

    private String text(ExperimentView view) {
        return parse(pages.experiment(view, FINE)).getDocumentElement().getTextContent();
    }

    private static ExperimentView nasty() {
        Plan plan = Northwater.plan(
                NASTY, NASTY, List.of(new Variant(NASTY, 0.5, true), new Variant(NASTY + "2", 0.5, false)), List.of());
        ExperimentView like = Northwater.cabinUpsell();
        return new ExperimentView(
                plan,
                NASTY,
                Optional.empty(),
                List.of(new VariantCount(0, NASTY, 10, 5)),
                like.outcomes(),
                like.split(),
                Trust.MISMATCH,
                NASTY,
                Verdict.CONTINUE,
                Map.of(NASTY + "2", like.comparisons().get("inside")),
                Map.of(),
                Map.of(NASTY + "2", Verdict.STOP_HARM),
                like.history(),
                1,
                1,
                NASTY,
                Map.of(),
                NASTY);
    }

    private static Document parse(String html) {
        try {
            return DocumentBuilderFactory.newInstance()
                    .newDocumentBuilder()
                    .parse(new InputSource(new StringReader(html.replaceFirst("<!DOCTYPE html>", ""))));
        } catch (SAXException | IOException | ParserConfigurationException e) {
            throw new AssertionError("not well-formed: " + e.getMessage() + "\n" + html, e);
        }
    }
}
