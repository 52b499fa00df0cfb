package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.connector.format.DecisionJson;
import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.format.EventSlotReader;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.connector.kafka.KeyPartitions;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.count.CountShard;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.event.EventSlot;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Verdict;
import io.tallyward.engine.verify.Finding;
import io.tallyward.engine.verify.RecordVerifier;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.EnumMap;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Random;
import java.util.TreeMap;
import org.junit.jupiter.api.Tag;
import org.junit.jupiter.api.Test;

/** What a log leads to depends on the log alone: random plans, random logs, several ways to the same decisions. */
class ReplayPropertyTest {

    private static final CountSettings SETTINGS =
            new CountSettings(Duration.ofMinutes(5), Duration.ofDays(1), new byte[] {1, 2, 3});
    private static final int MAX_BYTES = 65_536;

    @Test
    void holdsForRandomPlansAndLogs() {
        hold(1, 60);
    }

    @Tag("slow")
    @Test
    void holdsForThousandsOfRandomPlansAndLogs() {
        hold(1_000, 3_000);
    }

    private static void hold(int firstSeed, int seeds) {
        Map<Verdict, Integer> verdicts = new EnumMap<>(Verdict.class);
        int looks = 0;
        for (int seed = firstSeed; seed < firstSeed + seeds; seed++) {
            List<DecisionRecord> records = decidesTheSameByFileAndByShards(seed);
            verdicts.merge(records.get(records.size() - 1).verdict(), 1, Integer::sum);
            looks += records.stream()
                    .mapToInt(record -> record.comparisons().size())
                    .sum();
            countsTheSameInAnyOrderAndSplit(seed);
        }
        assertTrue(looks > seeds, looks + " looks, " + verdicts);
        assertTrue(verdicts.size() >= 4, "the logs lead to every kind of verdict, " + verdicts);
    }

    /** The file replay on the one hand; the shards with the quick reader and drains at random on the other. */
    private static List<DecisionRecord> decidesTheSameByFileAndByShards(int seed) {
        RandomExperiment experiment = new RandomExperiment(seed, true);
        int partitions = 1 + new Random(seed).nextInt(4);
        Replay replay = replay(experiment.plan(), experiment.lines(), partitions);
        List<DecisionRecord> driven = drive(experiment, partitions, new Random(seed));
        assertEquals(json(replay.decisions()), json(driven), "seed " + seed);
        verify(replay.decisions(), seed);
        return driven;
    }

    /** An order is within grace for the log as a whole, and so for each of its partitions. */
    private static void countsTheSameInAnyOrderAndSplit(int seed) {
        RandomExperiment experiment = new RandomExperiment(-seed, false);
        Replay first = replay(experiment.plan(), experiment.lines(), 1);
        verify(first.decisions(), -seed);
        assertSame(first, replay(experiment.plan(), experiment.reordered(seed), 1), "another order, seed " + seed);
        assertSame(first, replay(experiment.plan(), experiment.lines(), 3), "3 partitions, seed " + seed);
        Replay eight = replay(experiment.plan(), experiment.reordered(seed + 1), 8);
        assertSame(first, eight, "8 partitions, seed " + seed);
        verify(eight.decisions(), -seed);
    }

    private static void assertSame(Replay expected, Replay found, String message) {
        assertEquals(windows(expected), windows(found), message);
        DecisionRecord before = last(expected);
        DecisionRecord after = last(found);
        assertEquals(before.counts(), after.counts(), message);
        assertEquals(before.verdict(), after.verdict(), message);
    }

    private static DecisionRecord last(Replay replay) {
        List<DecisionRecord> records = replay.decisions();
        return records.get(records.size() - 1);
    }

    private static Map<String, String> windows(Replay replay) {
        Map<String, String> windows = new TreeMap<>();
        replay.windows().forEach((key, counts) -> windows.put(key.toString(), Arrays.deepToString(counts)));
        return windows;
    }

    private static Replay replay(Plan plan, List<String> lines, int partitions) {
        Replay replay =
                new Replay(List.of(plan), partitions, List.of("log"), SETTINGS, EventMapping.DEFAULT, MAX_BYTES);
        long line = 0;
        for (String text : lines) {
            replay.take(text.getBytes(StandardCharsets.UTF_8), "log", ++line);
        }
        replay.seal();
        return replay;
    }

    /** One partition after the other, drained now and then, as hosts do that read at different paces. */
    private static List<DecisionRecord> drive(RandomExperiment experiment, int partitions, Random random) {
        List<Plan> plans = List.of(experiment.plan());
        JsonEventReader reader = new JsonEventReader(EventMapping.DEFAULT, MAX_BYTES);
        DecideShard deciding = new DecideShard(plans);
        List<DecisionRecord> records = new ArrayList<>();
        List<CountShard> shards = new ArrayList<>();
        Map<String, Long> reach = new HashMap<>();
        for (int partition = 0; partition < partitions; partition++) {
            CountShard shard = new CountShard(partition, partitions, plans, SETTINGS, List.of("log"));
            EventSlotReader quick = new EventSlotReader(EventMapping.DEFAULT, MAX_BYTES, shard.names());
            for (String line : experiment.lines()) {
                byte[] value = line.getBytes(StandardCharsets.UTF_8);
                if (reader.read(value) instanceof Decoded.Accepted accepted && isIn(accepted, partition, partitions)) {
                    apply(shard, quick, value, accepted);
                }
                if (random.nextInt(200) == 0) {
                    shard.drain().tallies().forEach(deciding::apply);
                    records.addAll(deciding.drain().decisions());
                }
            }
            shard.reach().forEach((name, moment) -> reach.merge(name, moment, Math::max));
            shards.add(shard);
        }
        for (CountShard shard : shards) {
            shard.endOfInput(reach);
            shard.drain().tallies().forEach(deciding::apply);
        }
        records.addAll(deciding.drain().decisions());
        return records;
    }

    private static boolean isIn(Decoded.Accepted accepted, int partition, int partitions) {
        byte[] key = accepted.event().unit().getBytes(StandardCharsets.UTF_8);
        return KeyPartitions.partitionOf(key, partitions) == partition;
    }

    private static void apply(CountShard shard, EventSlotReader quick, byte[] value, Decoded.Accepted accepted) {
        long received = accepted.receivedMillis().orElse(accepted.event().atMillis());
        EventSlot slot = new EventSlot();
        if (quick.read(value, slot)) {
            shard.apply(0, received, slot);
        } else {
            shard.apply(0, received, accepted.event());
        }
    }

    private static List<String> json(List<DecisionRecord> records) {
        return records.stream()
                .map(record -> new String(DecisionJson.write(record), StandardCharsets.UTF_8))
                .toList();
    }

    private static void verify(List<DecisionRecord> records, int seed) {
        RecordVerifier verifier = new RecordVerifier();
        for (DecisionRecord record : records) {
            Optional<Finding> finding = verifier.take(record);
            assertEquals(Optional.empty(), finding, "seed " + seed);
        }
    }
}
