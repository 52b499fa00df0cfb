package io.tallyward.demo.story;

import io.tallyward.demo.story.Expectation.ExpectedNotice;
import io.tallyward.demo.story.Expectation.ExpectedOrigin;
import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;

/**
 * The split is broken: from the third day on, version 6.3 of the app loses every view of the variant "offer". The offer
 * changes nothing, but the visitors who are lost click more often than the others (15 % against 12 %), so that the offer
 * comes to look harmful. A monitor must see the missing views and withhold the verdict.
 *
 * <p>Power: 35 % of one variant are lost, about 500 units a day. Half a day after the break z of the split is 3.0, a day
 * after it 5.4, two days after it 9.4; the logarithm of the evidence, about half of z squared less the logarithm of its
 * width, then is near 40, against the 9.2 that the split check needs. Missing the break has a probability below 1e-9. Until
 * it is seen, an O'Brien-Fleming boundary stands above 4 while the expected z of the rates is -0.5, so that a stop before
 * that has a probability below 1e-4.
 */
public final class CabinUpsell implements Story {

    /** When the broken version of the app comes out. */
    static final Instant BREAK = Northwater.START.plus(Duration.ofDays(2));

    /** The broken version of the app, on whatever platform it runs. */
    static final String BROKEN_VERSION = "6.3";

    /** How far off the monitor may be about the beginning: of the 700 units of six hours it would have to explain 16 nats away. */
    private static final Duration NEAR = Duration.ofHours(6);

    private static final int OFFER = 1;

    @Override
    public String experiment() {
        return "cabin-upsell";
    }

    @Override
    public List<String> variants() {
        return List.of("seats", "offer");
    }

    @Override
    public double clickRate(int variant, long atMillis, Device device) {
        return device.version().equals(BROKEN_VERSION) ? 0.15 : 0.12;
    }

    @Override
    public boolean losesView(int variant, long atMillis, Device device) {
        return variant == OFFER && device.version().equals(BROKEN_VERSION) && atMillis >= BREAK.toEpochMilli();
    }

    @Override
    public Expectation expectation() {
        return new Expectation(
                "version 6.3 loses views from day 3",
                Map.of("offer", Set.of("waiting", "continue", "exhausted")),
                0,
                "mismatch",
                Optional.of(new ExpectedNotice("mismatch", "")),
                Optional.of(new ExpectedOrigin("version", BROKEN_VERSION, BREAK, NEAR)));
    }
}
