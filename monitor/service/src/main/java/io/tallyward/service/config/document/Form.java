package io.tallyward.service.config.document;

import java.util.List;

/**
 * Which values of a document a type takes, as far as one value by itself can tell: what a schema can say of it. Everything that a
 * type takes in its usual spelling has its form; what has the form may still be refused.
 */
public sealed interface Form {

    /** Any value. */
    record Any() implements Form {}

    /**
     * A text.
     *
     * @param pattern regular expression that matches the whole text, in the dialect that Java and ECMA-262 share
     * @param maxLength most characters
     */
    record Text(String pattern, int maxLength) implements Form {}

    /**
     * A number.
     *
     * @param range the range it lies in
     * @param whole whether it has no fraction
     */
    record Numeric(Range range, boolean whole) implements Form {}

    /** True or false. */
    record Flag() implements Form {}

    /** One of a few texts. */
    record Choice(List<String> texts) implements Form {
        public Choice {
            texts = List.copyOf(texts);
        }
    }

    /**
     * An ISO 8601 duration of days, hours, minutes and seconds.
     *
     * @param positive whether it is longer than nothing
     */
    record Length(boolean positive) implements Form {}

    /** An RFC 3339 time. */
    record Moment() implements Form {}

    /** A list of values of one form. */
    record Items(Form item, int min, int max) implements Form {}

    /** A mapping whose keys are the user's own names. */
    record Entries(Form name, Form value, int min, int max) implements Form {}

    /** A mapping with keys that are known. */
    record Keys(Shape shape) implements Form {}

    /** Any of several forms. */
    record Either(List<Form> forms) implements Form {
        public Either {
            forms = List.copyOf(forms);
        }
    }
}
