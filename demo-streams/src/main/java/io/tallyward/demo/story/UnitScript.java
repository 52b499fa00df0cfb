package io.tallyward.demo.story;

import io.tallyward.demo.story.StreamEvent.Kind;
import java.util.SplittableRandom;
import java.util.function.Consumer;

/**
 * Writes the events of one unit. It knows the unit, the variant it was given, the moment of its first view and whether
 * the first view persuades it; a {@link Twist} decides in which order and how late the events are delivered.
 */
final class UnitScript {

    /** Two events in a hundred are delivered twice. */
    private static final double DUPLICATED = 0.02;

    /** One duplicate in ten comes hours later, as after a restored backup of the emitter. */
    private static final double DUPLICATED_LATE = 0.1;

    private static final long LEAST_DUPLICATE_MILLIS = 100;
    private static final long MOST_DUPLICATE_MILLIS = 90_000;

    private final Story story;
    private final Visit visit;
    private final Ids ids;
    private final SplittableRandom random;
    private final Consumer<StreamEvent> out;
    private long lastView;

    /**
     * A unit's part in a story.
     *
     * @param unit identifier of the unit
     * @param device what it uses
     * @param variant the variant it was given, as a position in the story's variants
     * @param atMillis event time of its first view
     */
    record Visit(String unit, Device device, int variant, long atMillis) {}

    UnitScript(Story story, Visit visit, Ids ids, SplittableRandom random, Consumer<StreamEvent> out) {
        this.story = story;
        this.visit = visit;
        this.ids = ids;
        this.random = random;
        this.out = out;
    }

    long at() {
        return visit.atMillis();
    }

    int variant() {
        return visit.variant();
    }

    /** Another variant than the unit's own. */
    int otherVariant() {
        int count = story.variants().size();
        return (visit.variant() + 1 + random.nextInt(count - 1)) % count;
    }

    SplittableRandom random() {
        return random;
    }

    /** Whether the first view persuades the unit to click in time. */
    boolean persuaded() {
        return random.nextDouble() < story.clickRate(visit.variant(), visit.atMillis(), visit.device());
    }

    /** A view; nothing at all when the pipeline loses it. */
    void view(int variant, long atMillis, Delivery delivery) {
        lastView = ids.next();
        if (!story.losesView(variant, atMillis, visit.device())) {
            tell(new Told(Kind.VIEW, lastView, 0), variant, atMillis, delivery);
        }
    }

    /** A click; it names the unit's latest view, lost or not. */
    void click(int variant, long atMillis, Delivery delivery) {
        tell(new Told(Kind.CLICK, ids.next(), lastView), variant, atMillis, delivery);
    }

    /** A view by a clock that is far ahead of the record's arrival; it must be rejected. */
    void viewByBadClock(long receivedMillis, long aheadMillis) {
        emit(new StreamEvent(
                subject(visit.variant()),
                Kind.VIEW,
                ids.next(),
                0,
                receivedMillis + aheadMillis,
                receivedMillis,
                false,
                Flaw.CLOCK_AHEAD));
    }

    /** A view from before the run that was held back until after its start. */
    void viewBeforeRun(long beforeMillis) {
        long start = Northwater.START.toEpochMilli();
        emit(new StreamEvent(
                subject(visit.variant()),
                Kind.VIEW,
                ids.next(),
                0,
                start - beforeMillis,
                visit.atMillis() + Delivery.SLOW.delayMillis(random),
                false,
                Flaw.NONE));
    }

    /** A single view after the fourteen days, delivered once and promptly, even when all else has become quiet. */
    void lastView() {
        long received = at() + Delivery.PROMPT.delayMillis(random);
        out.accept(
                new StreamEvent(subject(visit.variant()), Kind.VIEW, ids.next(), 0, at(), received, false, Flaw.NONE));
    }

    /** What is told before its time and place are known. */
    private record Told(Kind kind, long id, long viewId) {}

    private void tell(Told told, int variant, long atMillis, Delivery delivery) {
        long received = atMillis + delivery.delayMillis(random);
        boolean late = delivery == Delivery.LATE;
        StreamEvent event = new StreamEvent(
                subject(variant), told.kind(), told.id(), told.viewId(), atMillis, received, late, Flaw.NONE);
        emit(event);
        if (random.nextDouble() < DUPLICATED) {
            boolean againLate = random.nextDouble() < DUPLICATED_LATE;
            long pause = againLate
                    ? Delivery.LATE.delayMillis(random)
                    : random.nextLong(LEAST_DUPLICATE_MILLIS, MOST_DUPLICATE_MILLIS);
            emit(event.again(received + pause, againLate));
        }
    }

    private void emit(StreamEvent event) {
        if (event.receivedMillis() < Northwater.QUIET_FROM.toEpochMilli()) {
            out.accept(event);
        }
    }

    private Subject subject(int variant) {
        return new Subject(story.experiment(), story.variants().get(variant), visit.unit(), visit.device());
    }
}
