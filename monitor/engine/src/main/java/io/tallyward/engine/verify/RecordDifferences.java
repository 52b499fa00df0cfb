package io.tallyward.engine.verify;

import io.tallyward.engine.count.Outcome;
import io.tallyward.engine.count.OutcomeCounts;
import java.lang.reflect.InvocationTargetException;
import java.lang.reflect.RecordComponent;
import java.util.ArrayList;
import java.util.List;
import java.util.Locale;
import java.util.Objects;

/** Compares two records component by component, so that none is forgotten; reals to the last bit. */
final class RecordDifferences {

    private final List<Difference> differences = new ArrayList<>();

    private RecordDifferences() {}

    /** Where two values of one record class differ, in the order of their components. */
    static List<Difference> between(Record recorded, Record expected) {
        RecordDifferences found = new RecordDifferences();
        found.compare("", recorded, expected);
        return found.differences;
    }

    private void compare(String path, Object recorded, Object expected) {
        if (Objects.equals(recorded, expected)) {
            return;
        }
        if (recorded instanceof Record one && expected instanceof Record other && one.getClass() == other.getClass()) {
            for (RecordComponent component : one.getClass().getRecordComponents()) {
                String name = path.isEmpty() ? component.getName() : path + "." + component.getName();
                compare(name, value(component, one), value(component, other));
            }
        } else if (recorded instanceof List<?> one && expected instanceof List<?> other && one.size() == other.size()) {
            for (int i = 0; i < one.size(); i++) {
                compare(path + "[" + i + "]", one.get(i), other.get(i));
            }
        } else if (recorded instanceof OutcomeCounts one && expected instanceof OutcomeCounts other) {
            for (Outcome outcome : Outcome.values()) {
                compare(path + "." + outcome.code(), one.get(outcome), other.get(outcome));
            }
        } else {
            differences.add(new Difference(path, shown(recorded), shown(expected)));
        }
    }

    private static Object value(RecordComponent component, Record record) {
        try {
            return component.getAccessor().invoke(record);
        } catch (IllegalAccessException | InvocationTargetException e) {
            throw new IllegalStateException("component " + component.getName() + " cannot be read", e);
        }
    }

    private static String shown(Object value) {
        if (value instanceof List<?> list) {
            return list.size() == 1 ? "1 entry" : list.size() + " entries";
        }
        if (value instanceof Enum<?> constant) {
            return constant.name().toLowerCase(Locale.ROOT).replace('_', '-');
        }
        return value instanceof Record ? "an object" : String.valueOf(value);
    }
}
