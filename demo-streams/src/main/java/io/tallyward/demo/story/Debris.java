package io.tallyward.demo.story;

import io.tallyward.demo.story.StreamEvent.Kind;
import java.time.Duration;
import java.util.SplittableRandom;
import java.util.function.Consumer;

/** Records that are no events of any experiment: a few of every {@link Flaw} but the bad clocks, which stories bring. */
final class Debris {

    private static final int EACH = 7;

    private Debris() {}

    static void scatter(Roster roster, Ids ids, SplittableRandom random, Consumer<StreamEvent> out) {
        long span = Duration.between(Northwater.START, Northwater.END).toMillis();
        for (Flaw flaw : Flaw.values()) {
            if (flaw == Flaw.NONE || flaw == Flaw.CLOCK_AHEAD) {
                continue;
            }
            for (int i = 0; i < EACH; i++) {
                String experiment = flaw == Flaw.STRANGE_EXPERIMENT ? "harbour-lights" : "quay-banner";
                String variant = flaw == Flaw.STRANGE_VARIANT ? "upside-down" : "wide";
                Subject subject = new Subject(experiment, variant, roster.unit(i), Device.WEB);
                long at = Northwater.START.toEpochMilli() + random.nextLong(span);
                long received = at + Delivery.PROMPT.delayMillis(random);
                out.accept(new StreamEvent(subject, Kind.VIEW, ids.next(), 0, at, received, false, flaw));
            }
        }
    }
}
