package io.tallyward.service.config.document;

import java.time.DateTimeException;
import java.time.Duration;
import java.time.Instant;
import java.time.OffsetDateTime;
import java.util.Arrays;
import java.util.List;
import java.util.Optional;
import java.util.function.Function;
import java.util.function.Predicate;
import java.util.regex.Pattern;
import java.util.stream.Stream;

/**
 * The type of a value that is written as one piece of text.
 *
 * @param expected what is expected, in words
 * @param parse the value of a text; empty when the text is none
 * @param choices the texts that are accepted, where they are few and fixed; empty else
 * @param form what a schema can say of the values
 */
public record ScalarType<T>(String expected, Function<String, Optional<T>> parse, List<String> choices, Form form)
        implements ValueType<T> {

    /** The form of names: of experiments, variants and of the service itself. */
    public static final String NAME = "[a-z0-9][a-z0-9-]{0,63}";

    private static final Pattern DECIMAL = Pattern.compile("[+-]?(\\d+\\.?\\d*|\\.\\d+)([eE][+-]?\\d{1,3})?");
    private static final Pattern WHOLE = Pattern.compile("-?\\d{1,18}");

    public ScalarType {
        choices = List.copyOf(choices);
    }

    /** A type of which no schema says anything. */
    public ScalarType(String expected, Function<String, Optional<T>> parse) {
        this(expected, parse, new Form.Any());
    }

    /** A type whose texts are too many to list. */
    public ScalarType(String expected, Function<String, Optional<T>> parse, Form form) {
        this(expected, parse, List.of(), form);
    }

    @Override
    public Optional<T> read(Node node, Place place) {
        if (node instanceof Node.Scalar scalar) {
            Optional<T> value = parse.apply(scalar.text());
            if (value.isPresent()) {
                return value;
            }
        }
        place.refuse(node, expected, choices);
        return Optional.empty();
    }

    /** Any text of at most {@code maxLength} characters that is not blank. */
    public static ScalarType<String> text(int maxLength) {
        return accepted(
                "text of at most " + maxLength + " characters",
                new Form.Text("[\\s\\S]*\\S[\\s\\S]*", maxLength),
                Optional::of,
                text -> !text.isBlank() && text.length() <= maxLength);
    }

    /** A text of a certain form. */
    public static ScalarType<String> matching(String regex, String expected) {
        return accepted(
                expected,
                new Form.Text(regex, Integer.MAX_VALUE),
                Optional::of,
                Pattern.compile(regex).asMatchPredicate());
    }

    /** A name as of an experiment or a variant. */
    public static ScalarType<String> name() {
        return matching(NAME, "a name of at most 64 lower-case letters, digits and hyphens");
    }

    /** A whole number in a closed range. */
    public static ScalarType<Integer> wholeNumber(int min, int max) {
        return accepted(
                        "whole number from " + min + " to " + max,
                        new Form.Numeric(Range.closed(min, max), true),
                        text -> WHOLE.matcher(text).matches()
                                ? Optional.of(Long.valueOf(text))
                                : Optional.<Long>empty(),
                        value -> value >= min && value <= max)
                .mapped(Long::intValue);
    }

    /** A finite number of a range, which {@code expected} puts into words. */
    public static ScalarType<Double> number(String expected, Range range) {
        return accepted(
                expected,
                new Form.Numeric(range, false),
                text -> DECIMAL.matcher(text).matches() ? Optional.of(Double.valueOf(text)) : Optional.empty(),
                value -> Double.isFinite(value) && range.holds(value));
    }

    /** A number in an open range. */
    public static ScalarType<Double> numberBetween(double low, double high) {
        return number("number above " + plain(low) + " and below " + plain(high), Range.open(low, high));
    }

    /** A share of something: above 0, at most 1. */
    public static ScalarType<Double> share() {
        return number("number above 0, at most 1", Range.above(0, 1));
    }

    /** A length of time of whole milliseconds in a closed range. */
    public static ScalarType<Duration> duration(Duration min, Duration max) {
        return accepted(
                "ISO 8601 duration from " + written(min) + " to " + written(max) + ", such as " + example(min, max),
                new Form.Length(!min.isZero()),
                ScalarType::parseDuration,
                value -> value.compareTo(min) >= 0 && value.compareTo(max) <= 0 && value.getNano() % 1_000_000 == 0);
    }

    private static String example(Duration min, Duration max) {
        return Stream.of(Duration.ofHours(6), Duration.ofSeconds(30))
                .filter(some -> some.compareTo(min) >= 0 && some.compareTo(max) <= 0)
                .findFirst()
                .orElse(max)
                .toString();
    }

    /** A moment with its offset from UTC, to the millisecond. */
    public static ScalarType<Instant> instant() {
        return accepted(
                "RFC 3339 time such as 2026-05-04T00:00:00Z",
                new Form.Moment(),
                ScalarType::parseInstant,
                value -> value.getNano() % 1_000_000 == 0);
    }

    /** True or false. */
    public static ScalarType<Boolean> flag() {
        ScalarType<Boolean> flag = choice("true or false", List.of(true, false), String::valueOf);
        return new ScalarType<>(flag.expected(), flag.parse(), flag.choices(), new Form.Flag());
    }

    /** One of the constants of an enum, by its published name. */
    public static <E extends Enum<E>> ScalarType<E> oneOf(Class<E> type, Function<E, String> code) {
        List<E> constants = Arrays.asList(type.getEnumConstants());
        return choice(String.join(" or ", constants.stream().map(code).toList()), constants, code);
    }

    /** The same texts, with values of another type. */
    public <U> ScalarType<U> mapped(Function<T, U> mapping) {
        return new ScalarType<>(expected, text -> parse.apply(text).map(mapping), choices, form);
    }

    /** An RFC 3339 time; empty when the text is none. */
    public static Optional<Instant> parseInstant(String text) {
        try {
            return Optional.of(OffsetDateTime.parse(text).toInstant());
        } catch (DateTimeException e) {
            return Optional.empty();
        }
    }

    /** An ISO 8601 duration of days, hours, minutes and seconds; empty when the text is none. */
    public static Optional<Duration> parseDuration(String text) {
        try {
            return Optional.of(Duration.parse(text));
        } catch (DateTimeException e) {
            return Optional.empty();
        }
    }

    /** A duration as people write it: whole days in days, where {@link Duration#toString()} says hours. */
    public static String written(Duration duration) {
        boolean days = !duration.isZero() && duration.equals(Duration.ofDays(duration.toDays()));
        return days ? "P" + duration.toDays() + "D" : duration.toString();
    }

    private static <T> ScalarType<T> choice(String expected, List<T> values, Function<T, String> code) {
        List<String> texts = values.stream().map(code).toList();
        return new ScalarType<>(
                expected,
                text -> values.stream()
                        .filter(value -> code.apply(value).equals(text))
                        .findFirst(),
                texts,
                new Form.Choice(texts));
    }

    private static <T> ScalarType<T> accepted(
            String expected, Form form, Function<String, Optional<T>> parse, Predicate<T> accepted) {
        return new ScalarType<>(expected, text -> parse.apply(text).filter(accepted), form);
    }

    private static String plain(double value) {
        return value == Math.rint(value) ? String.valueOf((long) value) : String.valueOf(value);
    }
}
