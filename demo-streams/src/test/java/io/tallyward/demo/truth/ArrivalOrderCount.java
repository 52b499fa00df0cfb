package io.tallyward.demo.truth;

import io.tallyward.demo.story.Flaw;
import io.tallyward.demo.story.Northwater;
import io.tallyward.demo.story.Story;
import io.tallyward.demo.story.StreamEvent;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.zip.CRC32;

/**
 * A second opinion on the truth: a slow reading of the same counting rules, event by event in the order of arrival, with
 * a watermark per partition. It never looks at the teller's word on what is late.
 */
final class ArrivalOrderCount {

    private static final long SEAL_DELAY =
            Northwater.ATTRIBUTION.plus(Northwater.GRACE).toMillis();

    private final Map<String, Story> stories;
    private final int partitions;
    private final long[] watermark;
    private final Map<String, Ledger> ledgers = new HashMap<>();
    private final Map<String, Map<Fate, Long>> fates = new HashMap<>();

    ArrivalOrderCount(Map<String, Story> stories, int partitions) {
        this.stories = stories;
        this.partitions = partitions;
        watermark = new long[partitions];
        stories.keySet().forEach(name -> fates.put(name, new HashMap<>()));
    }

    /** What is known of one unit in one experiment. */
    private static final class Ledger {
        private StreamEvent first;
        private final List<StreamEvent> accepted = new ArrayList<>();
    }

    void read(StreamEvent event) {
        if (event.flaw() != Flaw.NONE) {
            return;
        }
        String experiment = event.subject().experiment();
        if (!stories.containsKey(experiment)) {
            advance(event);
            return;
        }
        if (!stories.get(experiment).runsAt(event.atMillis())) {
            note(experiment, Fate.OUTSIDE);
            return;
        }
        int partition = Truth.partition(event.subject().unit(), partitions);
        Ledger ledger =
                ledgers.computeIfAbsent(experiment + '/' + event.subject().unit(), key -> new Ledger());
        if (isLate(ledger, event, watermark[partition])) {
            note(experiment, Fate.LATE);
        } else {
            accept(ledger, event);
        }
        advance(event);
    }

    /** A story told besides moves the watermark too; its run ends with the fourteen days. */
    private void advance(StreamEvent event) {
        boolean runs =
                event.atMillis() >= Northwater.START.toEpochMilli() && event.atMillis() < Northwater.END.toEpochMilli();
        Story story = stories.get(event.subject().experiment());
        if (story != null || runs) {
            int partition = Truth.partition(event.subject().unit(), partitions);
            watermark[partition] = Math.max(watermark[partition], event.atMillis());
        }
    }

    private static void accept(Ledger ledger, StreamEvent event) {
        if (event.isView() && (ledger.first == null || earlier(event, ledger.first))) {
            ledger.first = event;
        }
        ledger.accepted.add(event);
    }

    private static boolean isLate(Ledger ledger, StreamEvent event, long watermark) {
        StreamEvent first = ledger.first;
        if (event.isView()) {
            return (first == null || earlier(event, first)) && sealed(event, watermark);
        }
        return first != null
                && inTime(event, first)
                && sealed(first, watermark)
                && ledger.accepted.stream().noneMatch(other -> !other.isView() && inTime(other, first));
    }

    private static long checksum(StreamEvent event) {
        CRC32 checksum = new CRC32();
        checksum.update(String.format("%016x", event.id()).getBytes(StandardCharsets.UTF_8));
        return checksum.getValue();
    }

    private static boolean earlier(StreamEvent one, StreamEvent other) {
        int byTime = Long.compare(one.atMillis(), other.atMillis());
        return byTime != 0 ? byTime < 0 : checksum(one) < checksum(other);
    }

    private static boolean inTime(StreamEvent click, StreamEvent first) {
        return click.subject().variant().equals(first.subject().variant())
                && click.atMillis() >= first.atMillis()
                && click.atMillis() <= first.atMillis() + Northwater.ATTRIBUTION.toMillis();
    }

    private static boolean sealed(StreamEvent event, long watermark) {
        long end = Northwater.windowStart(event.atMillis()) + Northwater.WINDOW.toMillis();
        return watermark >= end + SEAL_DELAY;
    }

    private void note(String experiment, Fate fate) {
        fates.get(experiment).merge(fate, 1L, Long::sum);
    }

    /** Settles every ledger; returns the counts by experiment and place, windows that cannot be sealed left out. */
    Map<String, Map<Cell, Count>> settle() {
        Map<String, Map<Cell, Count>> counts = new HashMap<>();
        stories.keySet().forEach(name -> counts.put(name, new HashMap<>()));
        for (Ledger ledger : ledgers.values()) {
            if (!ledger.accepted.isEmpty()) {
                settle(ledger, counts);
            }
        }
        return counts;
    }

    private void settle(Ledger ledger, Map<String, Map<Cell, Count>> counts) {
        StreamEvent first = ledger.first;
        String experiment = ledger.accepted.get(0).subject().experiment();
        int successes = 0;
        int trials = 0;
        for (StreamEvent event : ledger.accepted) {
            Fate fate;
            if (first == null || (!event.isView() && event.atMillis() < first.atMillis())) {
                fate = Fate.ORPHAN;
            } else if (!event.subject().variant().equals(first.subject().variant())) {
                fate = Fate.CROSSOVER;
            } else if (event.isView()) {
                fate = trials++ == 0 ? Fate.TRIAL : Fate.REPEAT;
            } else if (!inTime(event, first)) {
                fate = Fate.EXPIRED;
            } else {
                fate = successes++ == 0 ? Fate.SUCCESS : Fate.REPEAT;
            }
            note(experiment, fate);
        }
        if (first == null) {
            return;
        }
        Story story = stories.get(experiment);
        int partition = Truth.partition(first.subject().unit(), partitions);
        if (!sealed(first, watermark[partition])) {
            fates.get(experiment).merge(Fate.TRIAL, -1L, Long::sum);
            return;
        }
        Cell cell = new Cell(
                partition,
                Northwater.windowStart(first.atMillis()),
                story.epochAt(first.atMillis()),
                story.variants().indexOf(first.subject().variant()));
        counts.get(experiment).merge(cell, new Count(1, Math.min(successes, 1)), Count::plus);
    }

    long fate(String experiment, Fate fate) {
        return fates.get(experiment).getOrDefault(fate, 0L);
    }
}
