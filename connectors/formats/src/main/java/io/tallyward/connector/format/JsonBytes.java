package io.tallyward.connector.format;

import com.fasterxml.jackson.core.JsonFactory;
import com.fasterxml.jackson.core.JsonGenerator;
import com.fasterxml.jackson.core.JsonProcessingException;
import java.io.ByteArrayOutputStream;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.time.Duration;
import java.time.Instant;
import java.time.ZoneOffset;
import java.util.List;
import java.util.Objects;

/** Writes JSON objects as UTF-8 bytes, refusing what JSON cannot hold instead of writing something else. */
final class JsonBytes {

    private static final JsonFactory FACTORY = new JsonFactory();
    private static final int LAST_YEAR = 9999;

    private JsonBytes() {}

    /** Writes one value somewhere into a document. */
    @FunctionalInterface
    interface Part<T> {
        void write(JsonGenerator json, T value) throws IOException;
    }

    /**
     * One object whose members {@code part} writes.
     *
     * @throws IllegalArgumentException if a text has no UTF-8 form or a number no JSON form
     */
    static <T> byte[] object(T value, Part<T> part) {
        ByteArrayOutputStream bytes = new ByteArrayOutputStream(1024);
        try (JsonGenerator json = FACTORY.createGenerator(bytes)) {
            json.writeStartObject();
            part.write(json, value);
            json.writeEndObject();
        } catch (JsonProcessingException e) {
            throw new IllegalArgumentException("text without a JSON form (expected: Unicode)", e);
        } catch (IOException e) {
            throw new UncheckedIOException("writing to memory failed", e);
        }
        return bytes.toByteArray();
    }

    static <T> void list(JsonGenerator json, String name, List<T> values, Part<T> part) throws IOException {
        json.writeArrayFieldStart(name);
        for (T value : values) {
            json.writeStartObject();
            part.write(json, value);
            json.writeEndObject();
        }
        json.writeEndArray();
    }

    static <T> void objectOrNull(JsonGenerator json, String name, T value, Part<T> part) throws IOException {
        if (value == null) {
            json.writeNullField(name);
            return;
        }
        json.writeObjectFieldStart(name);
        part.write(json, value);
        json.writeEndObject();
    }

    static void text(JsonGenerator json, String name, String value) throws IOException {
        json.writeStringField(name, Objects.requireNonNull(value, name));
    }

    static void real(JsonGenerator json, String name, double value) throws IOException {
        if (!Double.isFinite(value)) {
            throw new IllegalArgumentException(name + ": " + value + " (expected: a finite number)");
        }
        json.writeNumberField(name, value);
    }

    static void realOrNull(JsonGenerator json, String name, Double value) throws IOException {
        if (value == null) {
            json.writeNullField(name);
        } else {
            real(json, name, value);
        }
    }

    static void instant(JsonGenerator json, String name, Instant value) throws IOException {
        int year = value.atOffset(ZoneOffset.UTC).getYear();
        if (!(year >= 0 && year <= LAST_YEAR)) {
            throw new IllegalArgumentException(name + ": " + value + " (expected: years 0000 to " + LAST_YEAR + ")");
        }
        json.writeStringField(name, value.toString());
    }

    static void duration(JsonGenerator json, String name, Duration value) throws IOException {
        json.writeStringField(name, value.toString());
    }
}
