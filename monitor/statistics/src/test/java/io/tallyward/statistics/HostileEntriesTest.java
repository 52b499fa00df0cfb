package io.tallyward.statistics;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.statistics.spending.SpendingFunction;
import java.lang.reflect.InvocationTargetException;
import java.lang.reflect.Method;
import java.lang.reflect.Modifier;
import java.lang.reflect.ParameterizedType;
import java.lang.reflect.Type;
import java.math.BigInteger;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.Collection;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalDouble;
import java.util.Random;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;
import java.util.regex.Pattern;
import org.junit.jupiter.api.Test;

/**
 * Every public entry of the module, found by reflection, under hostile arguments drawn by a fixed seed: an answer without
 * NaN anywhere in it, or an IllegalArgumentException that names the argument, its value and what was expected. Objects that
 * come out are used as arguments and receivers of the next calls. An entry whose arguments cannot be made fails the test.
 */
class HostileEntriesTest {

    private static final long SEED = 1866;
    private static final int CALLS = 250;
    private static final int MOST_OBJECTS = 60;
    private static final int MOST_DEPTH = 6;

    /** Calls that take a second or more at the far end of their range. */
    private static final Map<String, Integer> CALLS_OF_SLOW_ONES = Map.of(
            "Design.of",
            40,
            "Dunnett",
            40,
            "ClassicalConstants",
            20,
            "StagewiseInference",
            60,
            "FutilitySequence",
            100);

    private static final Pattern MESSAGE = Pattern.compile("(?s)[^:]+: .+ \\(expected: .+\\)");

    private static final double[] HOSTILE = {
        Double.NaN,
        Double.POSITIVE_INFINITY,
        Double.NEGATIVE_INFINITY,
        -0.0,
        0,
        Double.MIN_VALUE,
        -Double.MIN_VALUE,
        Double.MIN_NORMAL,
        1e-300,
        1e-200,
        1e-16,
        1e150,
        1e300,
        Double.MAX_VALUE,
        -Double.MAX_VALUE,
        1 - 1e-16,
        1 + 1e-15,
        -1,
        -1e6,
        1e6
    };
    private static final double[] USUAL = {
        0, 0, 0.001, 0.01, 0.025, 0.05, 0.2, 0.3, 0.5, 0.7, 0.8, 0.9, 0.95, 1, 1.3, 2, 2.8, 3.5, -0.1, -2, 7
    };
    private static final long[] COUNTS = {
        Long.MIN_VALUE,
        -1,
        0,
        0,
        1,
        1,
        2,
        3,
        5,
        10,
        12,
        60,
        1000,
        1L << 31,
        1L << 53,
        (1L << 53) + 1,
        1_000_000_000_000L,
        Long.MAX_VALUE
    };
    private static final int[] SIZES = {Integer.MIN_VALUE, -1, 0, 1, 2, 3, 5, 201, Integer.MAX_VALUE};

    /** Entries of all arrays and lists of one call, mostly. */
    private int size;

    private final Random random = new Random(SEED);
    private final Map<Class<?>, List<Object>> objects = new HashMap<>();
    private final List<PublicEntry> entries = PublicEntry.all();
    private final Map<String, String> findings = new TreeMap<>();

    @Test
    void everyEntryAnswersOrSaysWhy() {
        assertTrue(entries.size() > 150, "entries found: " + entries.size());
        Map<String, Integer> answered = new TreeMap<>();
        for (int round = 0; round < 2; round++) {
            for (PublicEntry entry : entries) {
                answered.merge(entry.executable().toGenericString(), ask(entry), Integer::sum);
            }
        }
        assertEquals("", String.join("\n", findings.values()), "seed " + SEED);
        answered.values().removeIf(times -> times > 0);
        assertEquals(
                Map.of(),
                answered,
                "entries that never gave an answer: the arguments are too hostile to tell anything");
    }

    /** How many of the calls were answered. */
    private int ask(PublicEntry entry) {
        int answered = 0;
        for (int call = calls(entry); call > 0; call--) {
            Object receiver = entry.needsReceiver() ? any(entry.owner(), 0) : null;
            Object[] arguments = new Object[entry.parameters().length];
            double hostility = random.nextDouble() * random.nextDouble();
            size = random.nextInt(5);
            for (int i = 0; i < arguments.length; i++) {
                arguments[i] = value(entry.parameters()[i], hostility, 0);
            }
            if (entry.needsReceiver() && receiver == null
                    || Arrays.asList(arguments).contains(null)) {
                continue;
            }
            answered += call(entry, receiver, arguments) ? 1 : 0;
        }
        return answered;
    }

    private static int calls(PublicEntry entry) {
        boolean plain = entry.parameters().length == 0;
        return plain
                ? MOST_OBJECTS
                : CALLS_OF_SLOW_ONES.entrySet().stream()
                        .filter(slow -> entry.toString().startsWith(slow.getKey()))
                        .mapToInt(Map.Entry::getValue)
                        .findFirst()
                        .orElse(CALLS);
    }

    private boolean call(PublicEntry entry, Object receiver, Object[] arguments) {
        String where = entry + " " + Arrays.deepToString(arguments) + (receiver == null ? "" : " of " + receiver);
        try {
            Object answer = entry.call(receiver, arguments);
            if (holdsNaN(answer, 0)) {
                report(entry, "NaN out", where);
            } else {
                keep(answer);
            }
            return true;
        } catch (IllegalArgumentException e) {
            if (e.getMessage() == null || !MESSAGE.matcher(e.getMessage()).matches()) {
                report(entry, "message " + e.getMessage(), where);
            }
        } catch (Throwable e) {
            report(entry, e + " at " + e.getStackTrace()[0], where);
        }
        return false;
    }

    /** One of each kind is enough to look at. */
    private void report(PublicEntry entry, String what, String where) {
        findings.putIfAbsent(entry + what.replaceAll("[-0-9.E]+", "#"), shorten(what + ": " + where));
    }

    private static String shorten(String text) {
        return text.length() > 700 ? text.substring(0, 700) + "..." : text;
    }

    private void keep(Object answer) {
        if (answer instanceof Optional<?> optional) {
            optional.ifPresent(this::keep);
        } else if (answer instanceof List<?> values) {
            values.forEach(this::keep);
        } else if (answer != null && answer.getClass().getName().startsWith("io.tallyward")) {
            Class<?> type = answer instanceof SpendingFunction
                    ? SpendingFunction.class
                    : answer instanceof Enum<?> constant ? constant.getDeclaringClass() : answer.getClass();
            List<Object> known = objects.computeIfAbsent(type, key -> new ArrayList<>());
            if (known.size() < MOST_OBJECTS) {
                known.add(answer);
            } else {
                known.set(random.nextInt(MOST_OBJECTS), answer);
            }
        }
    }

    /** An object of the module: one that came out before, or a new one; null if none could be made. */
    private Object any(Class<?> type, int depth) {
        if (type.isEnum()) {
            Object[] constants = type.getEnumConstants();
            return constants[random.nextInt(constants.length)];
        }
        List<Object> known = objects.getOrDefault(type, List.of());
        if (!known.isEmpty() && (depth > 2 || known.size() >= 5 && random.nextInt(4) > 0)) {
            return known.get(random.nextInt(known.size()));
        }
        List<PublicEntry> makers = entries.stream()
                .filter(entry -> !entry.needsReceiver() && entry.produces().equals(type)
                        || !entry.needsReceiver()
                                && entry.owner().equals(type)
                                && entry.produces().equals(Optional.class))
                .toList();
        for (int attempt = 0; attempt < 40 && !makers.isEmpty() && depth < MOST_DEPTH; attempt++) {
            PublicEntry maker = makers.get(random.nextInt(makers.size()));
            Object[] arguments = new Object[maker.parameters().length];
            size = random.nextInt(5);
            for (int i = 0; i < arguments.length; i++) {
                arguments[i] = value(maker.parameters()[i], 0.03, depth + 1);
            }
            if (!Arrays.asList(arguments).contains(null) && call(maker, null, arguments)) {
                break;
            }
        }
        List<Object> made = objects.getOrDefault(type, List.of());
        return made.isEmpty() ? null : made.get(random.nextInt(made.size()));
    }

    private Object value(Type type, double hostility, int depth) {
        if (type instanceof ParameterizedType generic) {
            return container(generic, hostility, depth);
        }
        Class<?> plain = (Class<?>) type;
        if (plain == double.class || plain == Double.class) {
            return number(hostility);
        } else if (plain == long.class) {
            return count();
        } else if (plain == int.class || plain == Integer.class) {
            return random.nextDouble() < hostility ? SIZES[random.nextInt(SIZES.length)] : random.nextInt(6);
        } else if (plain == boolean.class) {
            return random.nextBoolean();
        } else if (plain == String.class) {
            return random.nextBoolean() ? "" : "ferry";
        } else if (plain == BigInteger.class) {
            return BigInteger.valueOf(count()).pow(1 + random.nextInt(3));
        } else if (plain == OptionalDouble.class) {
            return random.nextBoolean() ? OptionalDouble.empty() : OptionalDouble.of(number(hostility));
        } else if (plain == double[].class) {
            return numbers(hostility);
        } else if (plain == long[].class) {
            return random.longs(length(), 0, COUNTS.length)
                    .map(i -> COUNTS[(int) i])
                    .toArray();
        }
        assertTrue(plain.getName().startsWith("io.tallyward"), "no way to make a " + type);
        return any(plain, depth);
    }

    private Object container(ParameterizedType type, double hostility, int depth) {
        Type[] of = type.getActualTypeArguments();
        Class<?> raw = (Class<?>) type.getRawType();
        List<Object> values = new ArrayList<>();
        for (int i = length(); i > 0; i--) {
            Object value = value(of[of.length - 1], hostility, depth + 1);
            if (value != null) {
                values.add(value);
            }
        }
        if (raw == List.class) {
            return values;
        } else if (raw == Set.class) {
            return new TreeSet<>(values);
        } else if (raw == Optional.class) {
            return values.stream().findFirst();
        }
        assertEquals(Map.class, raw, "no way to make a " + type);
        Map<String, Object> map = new TreeMap<>();
        values.forEach(value -> map.put("segment " + map.size(), value));
        return map;
    }

    private double number(double hostility) {
        double[] pool = random.nextDouble() < hostility ? HOSTILE : USUAL;
        return pool[random.nextInt(pool.length)];
    }

    /** Mostly ascending, as most arrays of the module are. */
    private double[] numbers(double hostility) {
        double[] numbers = new double[length()];
        if (random.nextInt(3) == 0) {
            // equal steps to 1, as planned looks have them
            Arrays.setAll(numbers, i -> (i + 1.0) / numbers.length);
            return numbers;
        }
        Arrays.setAll(numbers, i -> number(hostility));
        if (random.nextInt(3) > 0) {
            Arrays.sort(numbers);
        }
        return numbers;
    }

    private int length() {
        return random.nextInt(10) == 0 ? random.nextInt(5) : size;
    }

    private long count() {
        return COUNTS[random.nextInt(COUNTS.length)];
    }

    private static boolean holdsNaN(Object answer, int depth) {
        if (answer instanceof Double number) {
            return Double.isNaN(number);
        } else if (answer instanceof double[] numbers) {
            return Arrays.stream(numbers).anyMatch(Double::isNaN);
        } else if (answer instanceof Optional<?> optional) {
            return optional.isPresent() && holdsNaN(optional.get(), depth);
        } else if (answer instanceof OptionalDouble optional) {
            return optional.isPresent() && Double.isNaN(optional.getAsDouble());
        } else if (answer instanceof Collection<?> values) {
            return values.stream().anyMatch(value -> holdsNaN(value, depth));
        } else if (answer instanceof Map<?, ?> map) {
            return holdsNaN(map.values(), depth);
        }
        return answer instanceof Record && depth < 3 && recordHoldsNaN(answer, depth);
    }

    private static boolean recordHoldsNaN(Object answer, int depth) {
        for (var component : answer.getClass().getRecordComponents()) {
            Method accessor = component.getAccessor();
            try {
                if (Modifier.isPublic(answer.getClass().getModifiers())
                        && holdsNaN(accessor.invoke(answer), depth + 1)) {
                    return true;
                }
            } catch (IllegalAccessException | InvocationTargetException e) {
                throw new IllegalStateException(accessor + ": " + e, e);
            }
        }
        return false;
    }
}
