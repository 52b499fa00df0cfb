package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.core.io.JsonEOFException;
import com.fasterxml.jackson.databind.DeserializationFeature;
import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectReader;
import com.fasterxml.jackson.databind.json.JsonMapper;
import java.io.IOException;
import java.lang.reflect.RecordComponent;
import java.time.DateTimeException;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.Arrays;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.function.Function;
import java.util.function.Predicate;
import java.util.stream.Stream;

/** The members of one JSON object, read strictly: each must be there, of its type. Messages carry the path to the member. */
final class JsonMembers {

    private static final ObjectReader READER = JsonMapper.builder()
            .enable(DeserializationFeature.FAIL_ON_READING_DUP_TREE_KEY)
            .enable(DeserializationFeature.FAIL_ON_TRAILING_TOKENS)
            .build()
            .reader();

    private final String path;
    private final JsonNode node;

    private JsonMembers(String path, JsonNode node) {
        this.path = path;
        this.node = node;
    }

    /**
     * Reads a document that must be one object.
     *
     * @param what the record it should be, for messages
     */
    static JsonMembers of(String what, byte[] bytes) {
        try {
            return member(what, READER.readTree(bytes));
        } catch (JsonEOFException e) {
            throw new RecordFormatException(what + ": it ends in the middle", true);
        } catch (JsonProcessingException e) {
            throw new RecordFormatException(what + ": not JSON: " + e.getOriginalMessage());
        } catch (IOException e) {
            throw new RecordFormatException(what + ": not UTF-8 text");
        }
    }

    /** Refuses members of other names than these. */
    void only(String... known) {
        List<String> names = List.of(known);
        for (String name : names()) {
            if (!names.contains(name)) {
                throw new RecordFormatException(
                        path + ": unknown member " + Quoted.of(name) + " (expected: " + String.join(", ", known) + ")");
            }
        }
    }

    /** Refuses members of other names than those of a record's components and these. */
    JsonMembers only(Class<? extends Record> type, String... besides) {
        only(Stream.concat(
                        Stream.of(besides),
                        Arrays.stream(type.getRecordComponents()).map(RecordComponent::getName))
                .toArray(String[]::new));
        return this;
    }

    /** Names of all members, in the order of the document. */
    List<String> names() {
        List<String> names = new ArrayList<>();
        node.fieldNames().forEachRemaining(names::add);
        return names;
    }

    boolean has(String name) {
        return node.has(name);
    }

    String text(String name) {
        JsonNode value = value(name);
        if (!value.isTextual()) {
            throw unexpected(name, value, "text");
        }
        return value.textValue();
    }

    long whole(String name) {
        JsonNode value = value(name);
        if (!value.isIntegralNumber() || !value.canConvertToLong()) {
            throw unexpected(name, value, "a whole number of at most 64 bits");
        }
        return value.longValue();
    }

    int index(String name) {
        JsonNode value = value(name);
        if (!value.isIntegralNumber() || !value.canConvertToInt()) {
            throw unexpected(name, value, "a whole number of at most 32 bits");
        }
        return value.intValue();
    }

    double real(String name) {
        JsonNode value = value(name);
        if (!value.isNumber() || !Double.isFinite(value.doubleValue())) {
            throw unexpected(name, value, "a finite number");
        }
        return value.doubleValue();
    }

    boolean flag(String name) {
        JsonNode value = value(name);
        if (!value.isBoolean()) {
            throw unexpected(name, value, "true or false");
        }
        return value.booleanValue();
    }

    Double realOrNull(String name) {
        return value(name).isNull() ? null : real(name);
    }

    Instant instant(String name) {
        String text = text(name);
        try {
            return Instant.parse(text);
        } catch (DateTimeException e) {
            throw unexpected(name, value(name), "an RFC 3339 time");
        }
    }

    Duration duration(String name) {
        String text = text(name);
        try {
            return Duration.parse(text);
        } catch (DateTimeException e) {
            throw unexpected(name, value(name), "an ISO 8601 duration, as in PT30M");
        }
    }

    <E extends Enum<E>> E code(String name, E[] values, Function<E, String> codeOf) {
        String text = text(name);
        for (E value : values) {
            if (codeOf.apply(value).equals(text)) {
                return value;
            }
        }
        List<String> codes = Arrays.stream(values).map(codeOf).toList();
        throw unexpected(name, value(name), "one of " + String.join(", ", codes));
    }

    <E extends Enum<E>> E codeOrNull(String name, E[] values, Function<E, String> codeOf) {
        return value(name).isNull() ? null : code(name, values, codeOf);
    }

    Optional<JsonMembers> objectOrNull(String name) {
        return value(name).isNull() ? Optional.empty() : Optional.of(object(name));
    }

    JsonMembers object(String name) {
        return member(path + "." + name, value(name));
    }

    <T> List<T> list(String name, Function<JsonMembers, T> read) {
        JsonNode value = value(name);
        if (!value.isArray()) {
            throw unexpected(name, value, "an array");
        }
        List<T> items = new ArrayList<>(value.size());
        for (JsonNode item : value) {
            items.add(read.apply(member(path + "." + name + "[" + items.size() + "]", item)));
        }
        return items;
    }

    /** A member that is an array of finite numbers. */
    List<Double> reals(String name) {
        return items(name, item -> item.isNumber() && Double.isFinite(item.doubleValue()), "finite numbers").stream()
                .map(JsonNode::doubleValue)
                .toList();
    }

    /** A member that is an array of whole numbers. */
    List<Long> wholes(String name) {
        return items(name, item -> item.isIntegralNumber() && item.canConvertToLong(), "whole numbers").stream()
                .map(JsonNode::longValue)
                .toList();
    }

    /** A member that is an array of texts. */
    List<String> texts(String name) {
        return items(name, JsonNode::isTextual, "texts").stream()
                .map(JsonNode::textValue)
                .toList();
    }

    private List<JsonNode> items(String name, Predicate<JsonNode> accepted, String expected) {
        JsonNode value = value(name);
        List<JsonNode> items = new ArrayList<>(value.size());
        value.forEach(items::add);
        if (!value.isArray() || !items.stream().allMatch(accepted)) {
            throw unexpected(name, value, "an array of " + expected);
        }
        return items;
    }

    /** All members as text, in the order of the document. */
    Map<String, String> texts() {
        Map<String, String> texts = new LinkedHashMap<>();
        node.fieldNames().forEachRemaining(name -> texts.put(name, text(name)));
        return texts;
    }

    /** Builds a value from members whose combination may be refused. */
    <T> T build(Function<JsonMembers, T> read) {
        try {
            return read.apply(this);
        } catch (RecordFormatException e) {
            throw e;
        } catch (IllegalArgumentException e) {
            throw new RecordFormatException(path + ": " + e.getMessage());
        }
    }

    private static JsonMembers member(String path, JsonNode node) {
        if (!node.isObject()) {
            throw new RecordFormatException(path + ": " + shown(node) + " (expected: an object)");
        }
        return new JsonMembers(path, node);
    }

    private JsonNode value(String name) {
        JsonNode value = node.get(name);
        if (value == null) {
            throw new RecordFormatException(path + "." + name + ": missing");
        }
        return value;
    }

    /** That a member is not what was expected. */
    RecordFormatException unexpected(String name, String expected) {
        return unexpected(name, value(name), expected);
    }

    private RecordFormatException unexpected(String name, JsonNode found, String expected) {
        return new RecordFormatException(path + "." + name + ": " + shown(found) + " (expected: " + expected + ")");
    }

    private static String shown(JsonNode node) {
        return switch (node.getNodeType()) {
            case STRING -> Quoted.of(node.textValue());
            case ARRAY -> "an array";
            case OBJECT -> "an object";
            case MISSING -> "nothing";
            case NUMBER, BOOLEAN, NULL, BINARY, POJO -> Quoted.sentence(node.asText());
        };
    }
}
