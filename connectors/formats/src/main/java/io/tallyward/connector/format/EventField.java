package io.tallyward.connector.format;

import java.util.Arrays;
import java.util.Locale;
import java.util.Optional;

/** The fields of an event that a mapping locates in a document. The codes are those of the configuration. */
public enum EventField {
    /** What happened; its values are translated by {@link EventMapping#kinds()}. */
    KIND(true),
    /** Name of the experiment. */
    EXPERIMENT(true),
    /** Name of the variant. */
    VARIANT(true),
    /** Identifier of the randomised unit: text or a number. */
    UNIT(true),
    /** Identifier of the event within its source: text or a number. */
    ID(true),
    /** Event time: RFC 3339 text or integer milliseconds since the epoch. */
    AT(true),
    /** The emitter of the event. */
    SOURCE(false),
    /** For a click, the id of the view that was clicked: text or a number. */
    VIEW(false),
    /** Low-cardinality fields: an object of text. */
    SEGMENTS(false),
    /** When the pipeline received the event, in the forms of {@link #AT}; read by a file replay. */
    RECEIVED(false);

    private final boolean required;

    EventField(boolean required) {
        this.required = required;
    }

    /** Whether every event must have the field, and every mapping a pointer to it. */
    public boolean required() {
        return required;
    }

    /** The name in the configuration, as in {@code segments}. */
    public String code() {
        return name().toLowerCase(Locale.ROOT);
    }

    /** The field of a code; empty when there is none. */
    public static Optional<EventField> of(String code) {
        return Arrays.stream(values())
                .filter(field -> field.code().equals(code))
                .findFirst();
    }

    boolean acceptsNumbers() {
        return this == UNIT || this == ID || this == VIEW;
    }
}
