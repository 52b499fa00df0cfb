package io.tallyward.demo.story;

import java.time.Duration;
import java.time.Instant;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/**
 * The fare chip does nothing, but its traffic is ramped from 10 % to 50 % after a week, just when the school holidays raise
 * everybody's click rate from 10 % to 16 %. Pooled over the ramp the chip seems to win by 2.9 points (15.0 % against
 * 12.1 %, z near 8), because most of its visitors came in the better week; within each week there is no difference.
 *
 * <p>Any monitor that works stops this one with the probability of a false alarm, 0.05.
 */
public final class FareChip implements Story {

    private static final Instant RAMP = Northwater.START.plus(Duration.ofDays(7));

    @Override
    public String experiment() {
        return "fare-chip";
    }

    @Override
    public List<String> variants() {
        return List.of("bare", "chip");
    }

    @Override
    public List<Instant> splitChanges() {
        return List.of(RAMP);
    }

    @Override
    public double[] shares(int epoch) {
        return epoch == 0 ? new double[] {0.9, 0.1} : new double[] {0.5, 0.5};
    }

    @Override
    public double clickRate(int variant, long atMillis, Device device) {
        return atMillis < RAMP.toEpochMilli() ? 0.10 : 0.16;
    }

    @Override
    public Expectation expectation() {
        return new Expectation(
                "no effect, ramped", Map.of("chip", Expectation.NO_STOP), 0.05, "sound", Optional.empty());
    }
}
