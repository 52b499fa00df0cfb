package io.tallyward.demo.truth;

import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.story.StreamEvent;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.HexFormat;
import java.util.List;
import java.util.Optional;
import java.util.zip.CRC32;

/**
 * The counting rules applied to everything one unit did in one experiment, read as a whole.
 *
 * @param firstView the exposure that stands; empty when no view was delivered in time
 * @param success whether it is a success
 * @param fates what becomes of each event, in the order in which the events were given
 */
record UnitVerdict(Optional<StreamEvent> firstView, boolean success, List<Fate> fates) {

    static final Comparator<StreamEvent> EARLIEST =
            Comparator.comparingLong(StreamEvent::atMillis).thenComparingLong(UnitVerdict::checksum);

    /** The published breaker of ties: the CRC-32 of the id as it is written. */
    private static long checksum(StreamEvent event) {
        CRC32 checksum = new CRC32();
        checksum.update(HexFormat.of().toHexDigits(event.id()).getBytes(StandardCharsets.US_ASCII));
        return checksum.getValue();
    }

    /** Judges the events of one unit in one experiment, none of them rejected, in the order of their arrival. */
    static UnitVerdict of(Story story, List<StreamEvent> events) {
        List<StreamEvent> inTime = events.stream()
                .filter(event -> story.runsAt(event.atMillis()) && !event.late())
                .toList();
        Optional<StreamEvent> first =
                inTime.stream().filter(StreamEvent::isView).min(EARLIEST);
        Optional<StreamEvent> winner = first.flatMap(view -> inTime.stream()
                .filter(event -> !event.isView() && answers(event, view))
                .min(EARLIEST));
        List<Fate> fates = new ArrayList<>(events.size());
        boolean trialSeen = false;
        boolean successSeen = false;
        for (StreamEvent event : events) {
            Fate fate;
            if (!trialSeen && first.isPresent() && event == first.get()) {
                trialSeen = true;
                fate = Fate.TRIAL;
            } else if (!successSeen && winner.isPresent() && event == winner.get()) {
                successSeen = true;
                fate = Fate.SUCCESS;
            } else {
                fate = fate(story, event, first, winner.isPresent());
            }
            fates.add(fate);
        }
        return new UnitVerdict(first, winner.isPresent(), fates);
    }

    private static Fate fate(Story story, StreamEvent event, Optional<StreamEvent> first, boolean success) {
        if (!story.runsAt(event.atMillis())) {
            return Fate.OUTSIDE;
        }
        if (first.isEmpty()) {
            return event.isView() ? Fate.LATE : Fate.ORPHAN;
        }
        StreamEvent view = first.get();
        if (event.isView() ? EARLIEST.compare(event, view) < 0 : event.atMillis() < view.atMillis()) {
            return event.isView() ? Fate.LATE : Fate.ORPHAN;
        }
        if (!sameVariant(event, view)) {
            return Fate.CROSSOVER;
        }
        if (event.isView()) {
            return Fate.REPEAT;
        }
        if (!answers(event, view)) {
            return Fate.EXPIRED;
        }
        return success ? Fate.REPEAT : Fate.LATE;
    }

    private static boolean answers(StreamEvent click, StreamEvent view) {
        long after = click.atMillis() - view.atMillis();
        return sameVariant(click, view) && after >= 0 && after <= Northwater.ATTRIBUTION.toMillis();
    }

    static boolean sameVariant(StreamEvent one, StreamEvent other) {
        return one.subject().variant().equals(other.subject().variant());
    }
}
