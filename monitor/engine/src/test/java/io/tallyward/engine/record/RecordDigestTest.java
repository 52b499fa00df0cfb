package io.tallyward.engine.record;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import java.lang.reflect.RecordComponent;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Set;
import org.junit.jupiter.api.Test;

/** The digest of a record covers every field, found by reflection so that a field added later is not forgotten. */
class RecordDigestTest {

    private static final Comparison LOOK = new Comparison(
            "wide",
            2,
            1.25,
            3000,
            0.4,
            0.4,
            0.05,
            0.001,
            3.5,
            -3.5,
            null,
            0.01,
            -0.02,
            0.04,
            new Estimated(0.05, -0.1, null),
            new Outlook(0.4, 0.5, 0.1, 0.3),
            new Adjusted(
                    0.04,
                    0.95,
                    new Estimated(2, 0.1, 4.0),
                    new Estimated(0.009, 0.0, 0.03),
                    new Estimated(0.045, 0.0, 0.2)),
            new Clustering(1.75, 1.96),
            Verdict.CONTINUE,
            null,
            "z 1.250 lies between the boundaries");

    private static final SplitOrigin ORIGIN = new SplitOrigin(
            0,
            Instant.parse("2026-05-04T06:00:00Z"),
            Instant.parse("2026-05-04T06:40:00Z"),
            12.5,
            List.of(new PlannedUnits("plain", 0.5, 60), new PlannedUnits("wide", 0.5, 30)),
            new SegmentSplit(
                    "version",
                    "6.3",
                    List.of(new PlannedUnits("plain", 0.5, 50), new PlannedUnits("wide", 0.5, 20)),
                    List.of(new PlannedUnits("plain", 0.5, 51), new PlannedUnits("wide", 0.5, 52)),
                    12.9,
                    0.001,
                    0.002,
                    6,
                    true));

    private static final SplitPeak PEAK = new SplitPeak(
            0.25, List.of(new SplitPeak.EpochUnits(0, "plain", 40), new SplitPeak.EpochUnits(0, "wide", 55)));

    /** What a record may lack. */
    private static final Set<Class<?>> OPTIONAL = Set.of(
            Estimated.class,
            Outlook.class,
            Adjusted.class,
            Clustering.class,
            UnitTotals.class,
            Plan.class,
            Amendment.class,
            Silence.class,
            SplitPeak.class,
            SplitOrigin.class,
            SegmentSplit.class);

    private static final DecisionRecord RECORD = new DecisionRecord(
            "quay-banner",
            3,
            Occasion.LOOK,
            Instant.parse("2026-05-05T00:00:00Z"),
            "a".repeat(64),
            Plans.plan("quay-banner").build(),
            new Amendment(
                    Instant.parse("2026-05-05T00:00:00Z"),
                    "a ramp",
                    new Amendment.Shares(Map.of("plain", 0.25, "wide", 0.75))),
            List.of(
                    new VariantCount(0, "plain", 100, 20, new UnitTotals(40, 310, 62, 24)),
                    new VariantCount(0, "wide", 101, 25, new UnitTotals(41, 315, 77, 31))),
            OutcomeCounts.of(201, 45, 3, 2, 1, 5, 6, 7, 0),
            4,
            new Split(-1.5, 1, 0.25, 1, 0.6, PEAK, ORIGIN),
            Trust.SOUND,
            "",
            new Silence("wide", Instant.parse("2026-05-04T18:00:00Z"), 31),
            Verdict.CONTINUE,
            List.of(LOOK),
            "1",
            "b".repeat(64),
            "c".repeat(64));

    /** Every record that differs from the given one in one place, by the name of the place. */
    private static Map<String, Record> neighbours(Record record) throws ReflectiveOperationException {
        Map<String, Record> result = new HashMap<>();
        RecordComponent[] components = record.getClass().getRecordComponents();
        Class<?>[] types =
                Arrays.stream(components).map(RecordComponent::getType).toArray(Class<?>[]::new);
        var constructor = record.getClass().getDeclaredConstructor(types);
        for (int i = 0; i < components.length; i++) {
            Object[] values = new Object[components.length];
            for (int j = 0; j < components.length; j++) {
                values[j] = components[j].getAccessor().invoke(record);
            }
            Map<String, Object> others = new HashMap<>();
            collectOthers(components[i].getName(), types[i], values[i], others);
            for (Map.Entry<String, Object> other : others.entrySet()) {
                values[i] = other.getValue();
                result.put(other.getKey(), (Record) constructor.newInstance(values));
            }
        }
        return result;
    }

    private static void collectOthers(String name, Class<?> type, Object value, Map<String, Object> others)
            throws ReflectiveOperationException {
        if (value instanceof String text) {
            others.put(name, text + "x");
        } else if (value instanceof Integer number) {
            others.put(name, number + 1);
        } else if (value instanceof Long number) {
            others.put(name, number + 1);
        } else if (value instanceof Boolean flag) {
            others.put(name, !flag);
        } else if (value instanceof Instant moment) {
            others.put(name, moment.plusMillis(1));
        } else if (value instanceof OutcomeCounts outcomes) {
            collectOutcomes(name, outcomes, others);
        } else if (value instanceof Plan plan) {
            others.put(name + "=other", Plans.plan("quay-banner").alpha(0.01).build());
            others.put(name + "=amended", plan.amended(List.of(RECORD.amendment())));
            others.put(name + "=null", null);
        } else if (value instanceof Amendment.Change) {
            others.put(name + "=end", new Amendment.End(RECORD.windowEnd()));
            others.put(name + "=later end", new Amendment.End(RECORD.windowEnd().plusMillis(1)));
            others.put(name + "=stop", new Amendment.Stop());
            others.put(name + "=shares", new Amendment.Shares(Map.of("plain", 0.5, "wide", 0.5)));
            others.put(name + "=other", new Amendment.Shares(Map.of("plain", 0.25, "tall", 0.75)));
        } else if (value instanceof Record inner) {
            neighbours(inner).forEach((place, changed) -> others.put(name + "." + place, changed));
            if (OPTIONAL.contains(type)) {
                others.put(name + "=null", null);
            }
        } else if (value instanceof List<?> list) {
            collectLists(name, list, others);
        } else if (type == Double.class || type == double.class) {
            collectReals(name, type, (Double) value, others);
        } else if (type.isEnum()) {
            for (Object constant : type.getEnumConstants()) {
                if (constant != value) {
                    others.put(name + "=" + constant, constant);
                }
            }
        } else {
            throw new AssertionError(name + ": this test knows no other value of " + type);
        }
    }

    private static void collectReals(String name, Class<?> type, Double value, Map<String, Object> others) {
        others.put(name, value == null ? Double.valueOf(0) : Double.valueOf(Math.nextUp(value)));
        if (type == Double.class && value != null) {
            others.put(name + "=null", null);
        }
    }

    private static void collectOutcomes(String name, OutcomeCounts outcomes, Map<String, Object> others) {
        for (int i = 0; i < outcomes.toArray().length; i++) {
            long[] counts = outcomes.toArray();
            counts[i]++;
            others.put(name + "[" + i + "]", OutcomeCounts.of(counts));
        }
    }

    private static void collectLists(String name, List<?> list, Map<String, Object> others)
            throws ReflectiveOperationException {
        others.put(name + " shorter", list.subList(1, list.size()));
        List<Object> longer = new ArrayList<>(list);
        longer.add(list.get(0));
        others.put(name + " longer", longer);
        for (int i = 0; i < list.size(); i++) {
            int index = i;
            neighbours((Record) list.get(i)).forEach((place, changed) -> {
                List<Object> copy = new ArrayList<>(list);
                copy.set(index, changed);
                others.put(name + "[" + index + "]." + place, copy);
            });
        }
    }

    @Test
    void changesWithEveryFieldButTheHashItself() throws ReflectiveOperationException {
        String digest = RecordDigest.of(RECORD);
        Map<String, String> placeByDigest = new HashMap<>();
        placeByDigest.put(digest, "the record itself");
        Map<String, Record> neighbours = neighbours(RECORD);
        assertEquals(digest, RecordDigest.of((DecisionRecord) neighbours.remove("hash")));
        neighbours.forEach((place, changed) -> {
            String other = placeByDigest.put(RecordDigest.of((DecisionRecord) changed), place);
            assertEquals(null, other, () -> place + " has the digest of " + other);
        });
        assertTrue(neighbours.size() > 60, "places: " + neighbours.keySet());
    }

    @Test
    void fillsInTheHashAndNothingElse() {
        DecisionRecord sealed = RecordDigest.seal(RECORD);
        assertEquals(RecordDigest.of(RECORD), sealed.hash());
        assertNotEquals(RECORD.hash(), sealed.hash());
        assertEquals(sealed, RecordDigest.seal(sealed));
    }
}
