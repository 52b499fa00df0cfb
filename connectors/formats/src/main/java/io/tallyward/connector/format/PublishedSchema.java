package io.tallyward.connector.format;

import java.io.IOException;
import java.io.InputStream;
import java.io.UncheckedIOException;
import java.nio.charset.StandardCharsets;
import java.util.Locale;

/** The JSON Schemas (2020-12) of what comes in and of what is published, as they lie in the jar under {@code /schema}. */
public enum PublishedSchema {
    /** An event with its default field names. */
    EVENT,
    /** A decision record. */
    DECISION,
    /** A notice, as it waits in the outbox. */
    NOTICE;

    /** Its name in commands and files, as in {@code decision}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT);
    }

    /** The schema as JSON. */
    public String text() {
        String place = "/schema/" + code() + ".schema.json";
        try (InputStream in = PublishedSchema.class.getResourceAsStream(place)) {
            return new String(in.readAllBytes(), StandardCharsets.UTF_8);
        } catch (IOException e) {
            throw new UncheckedIOException(place + ": cannot be read from the jar", e);
        }
    }
}
