package io.tallyward.engine.verify;

import io.tallyward.engine.Plans;
import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.Adjusted;
import io.tallyward.engine.record.Clustering;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.Estimated;
import io.tallyward.engine.record.Outlook;
import io.tallyward.engine.record.RecordDigest;
import io.tallyward.engine.record.Silence;
import io.tallyward.engine.record.SplitOrigin;
import io.tallyward.engine.record.SplitPeak;
import io.tallyward.engine.record.UnitTotals;
import io.tallyward.engine.record.Verdict;
import java.lang.reflect.InvocationTargetException;
import java.lang.reflect.RecordComponent;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.Collections;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;

/** Changes records in one place each, by reflection, so that a field added later is not forgotten. */
final class Forgery {

    /** What a record may have where it has nothing. */
    private static final Map<Class<?>, Object> PRESENT = Map.ofEntries(
            Map.entry(Double.class, 0.5),
            Map.entry(Estimated.class, new Estimated(0.1, 0.0, 0.2)),
            Map.entry(Outlook.class, new Outlook(0.4, 0.5, 0.1, 0.3)),
            Map.entry(
                    Adjusted.class,
                    new Adjusted(0.04, 0.95, new Estimated(2, 0.1, 4.0), new Estimated(0.1, 0.0, 0.2), null)),
            Map.entry(Clustering.class, new Clustering(1.5, 1.2)),
            Map.entry(UnitTotals.class, new UnitTotals(10, 10, 1, 1)),
            Map.entry(Silence.class, new Silence("", Plans.FROM, 0)),
            Map.entry(SplitPeak.class, new SplitPeak(0.25, List.of(new SplitPeak.EpochUnits(0, "plain", 40)))),
            Map.entry(
                    SplitOrigin.class,
                    new SplitOrigin(0, Plans.FROM, Plans.FROM.plusSeconds(3600), 9, List.of(), null)),
            Map.entry(Plan.class, Plans.plan("quay-banner").build()),
            Map.entry(Amendment.class, new Amendment(Plans.FROM.plusSeconds(3600), "no more", new Amendment.Stop())),
            Map.entry(
                    SplitOrigin.SegmentSplit.class,
                    new SplitOrigin.SegmentSplit("release", "old", List.of(), List.of(), 9, 0.001, 0.001, 1, true)));

    /** The one optional member whose class others have that are not optional. */
    private static final String HELD = "held";

    private Forgery() {}

    /**
     * A record changed in one place.
     *
     * @param path the place, named like the members of the published form, with what was done to it
     */
    record Changed(String path, DecisionRecord record) {}

    /** A record with the digest that it should have. */
    static DecisionRecord sealed(DecisionRecord record) {
        return RecordDigest.seal(record);
    }

    /** The records in one chain, whatever they say. */
    static List<DecisionRecord> chained(List<DecisionRecord> records) {
        List<DecisionRecord> chain = new ArrayList<>();
        String previous = DecisionRecord.NO_PREVIOUS;
        for (DecisionRecord record : records) {
            DecisionRecord sealed = sealed(record.chained(previous, ""));
            chain.add(sealed);
            previous = sealed.hash();
        }
        return chain;
    }

    /** The records with one of them changed in one place. */
    static List<DecisionRecord> with(List<DecisionRecord> records, int index, DecisionRecord changed) {
        List<DecisionRecord> copy = new ArrayList<>(records);
        copy.set(index, changed);
        return copy;
    }

    /** One of the changes. */
    static DecisionRecord changed(DecisionRecord record, String path) {
        return all(record).stream()
                .filter(changed -> changed.path().equals(path))
                .findFirst()
                .orElseThrow()
                .record();
    }

    /** Every change of a record in one place. */
    static List<Changed> all(DecisionRecord record) {
        List<Changed> all = new ArrayList<>();
        of(record).forEach((path, changed) -> all.add(new Changed(path, (DecisionRecord) changed)));
        return all;
    }

    private static Map<String, Object> of(Record record) {
        Map<String, Object> result = new LinkedHashMap<>();
        RecordComponent[] components = record.getClass().getRecordComponents();
        Object[] values = Arrays.stream(components)
                .map(component -> value(component, record))
                .toArray();
        for (int i = 0; i < components.length; i++) {
            int place = i;
            String name = components[i].getName();
            Map<String, Object> others = changes(components[i].getType(), values[i]);
            if (name.equals(HELD)) {
                others.put(values[i] == null ? " present" : " absent", values[i] == null ? Verdict.STOP_BENEFIT : null);
            }
            others.forEach((path, other) ->
                    with(record, values, place, other).ifPresent(changed -> result.put(joined(name, path), changed)));
        }
        return result;
    }

    private static String joined(String name, String path) {
        return path.startsWith("[") || path.startsWith(" ") ? name + path : name + "." + path;
    }

    private static Object value(RecordComponent component, Record record) {
        try {
            return component.getAccessor().invoke(record);
        } catch (ReflectiveOperationException e) {
            throw new AssertionError(e);
        }
    }

    /** The record with another value in one place; empty if it refuses it, as no such record can be read either. */
    private static Optional<Object> with(Record record, Object[] values, int place, Object other) {
        Object[] changed = values.clone();
        changed[place] = other;
        Class<?>[] types = Arrays.stream(record.getClass().getRecordComponents())
                .map(RecordComponent::getType)
                .toArray(Class<?>[]::new);
        try {
            return Optional.of(record.getClass().getDeclaredConstructor(types).newInstance(changed));
        } catch (InvocationTargetException e) {
            return Optional.empty();
        } catch (ReflectiveOperationException e) {
            throw new AssertionError(e);
        }
    }

    private static Map<String, Object> changes(Class<?> type, Object value) {
        Map<String, Object> others = new LinkedHashMap<>();
        if (value == null) {
            others.put(" present", PRESENT.get(type));
            return others;
        }
        if (PRESENT.containsKey(type)) {
            others.put(" absent", null);
        }
        if (value instanceof String text) {
            others.put(" changed", text + "x");
        } else if (value instanceof Integer number) {
            others.put(" more", number + 1);
            others.put(" less", number - 1);
        } else if (value instanceof Long number) {
            others.put(" more", number + 1);
            others.put(" less", number - 1);
        } else if (value instanceof Double number) {
            others.put(" more", Math.nextUp(number));
            others.put(" less", Math.nextDown(number));
        } else if (value instanceof Boolean flag) {
            others.put(" flipped", !flag);
        } else if (value instanceof Instant moment) {
            others.put(" 1 ms later", moment.plusMillis(1));
            others.put(" a window later", moment.plusSeconds(3600));
            others.put(" a window earlier", moment.minusSeconds(3600));
        } else if (value instanceof Duration duration) {
            others.put(" longer", duration.plusMillis(1));
        } else if (value instanceof Enum<?> constant) {
            for (Object other : constant.getDeclaringClass().getEnumConstants()) {
                if (other != value) {
                    others.put(" " + other, other);
                }
            }
        } else if (value instanceof OutcomeCounts outcomes) {
            for (Outcome outcome : Outcome.values()) {
                long[] counts = outcomes.toArray();
                counts[outcome.ordinal()]++;
                others.put(outcome.code() + " more", OutcomeCounts.of(counts));
                counts[outcome.ordinal()] -= 2;
                others.put(outcome.code() + " less", OutcomeCounts.of(counts));
            }
        } else if (value instanceof Optional<?> optional) {
            optional.ifPresent(present -> {
                others.put(" absent", Optional.empty());
                changes(Object.class, present).forEach((path, other) -> others.put(path, Optional.of(other)));
            });
        } else if (value instanceof Record inner) {
            others.putAll(of(inner));
        } else if (value instanceof List<?> list) {
            lists(list, others);
        } else if (value instanceof Map<?, ?> map) {
            maps(map, others);
        } else {
            throw new AssertionError("no other value of " + type + " is known");
        }
        return others;
    }

    private static void lists(List<?> list, Map<String, Object> others) {
        for (int i = 0; i < list.size(); i++) {
            int index = i;
            List<Object> without = new ArrayList<>(list);
            without.remove(i);
            others.put("[" + i + "] dropped", without);
            if (i > 0 && !list.get(i).equals(list.get(i - 1))) {
                List<Object> swapped = new ArrayList<>(list);
                Collections.swap(swapped, i - 1, i);
                others.put("[" + i + "] swapped", swapped);
            }
            changes(Object.class, list.get(i)).forEach((path, other) -> {
                List<Object> copy = new ArrayList<>(list);
                copy.set(index, other);
                others.put(joined("[" + index + "]", path), copy);
            });
        }
    }

    private static void maps(Map<?, ?> map, Map<String, Object> others) {
        map.forEach((key, value) -> changes(Object.class, value).forEach((path, other) -> {
            Map<Object, Object> copy = new TreeMap<>(map);
            copy.put(key, other);
            others.put(joined(String.valueOf(key), path), copy);
        }));
    }
}
