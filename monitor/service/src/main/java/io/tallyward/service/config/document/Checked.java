package io.tallyward.service.config.document;

import java.util.List;
import java.util.Optional;

/**
 * A value that was read from the user's files, or everything that kept it from being read.
 *
 * @param value the value; present exactly when there are no problems
 * @param problems what is wrong; empty exactly when there is a value
 */
public record Checked<T>(Optional<T> value, List<Problem> problems) {

    public Checked {
        problems = List.copyOf(problems);
        if (value.isPresent() != problems.isEmpty()) {
            throw new IllegalArgumentException(
                    "checked: " + problems.size() + " problems (expected: either a value or problems)");
        }
    }

    public static <T> Checked<T> of(T value) {
        return new Checked<>(Optional.of(value), List.of());
    }

    public static <T> Checked<T> refused(List<Problem> problems) {
        return new Checked<>(Optional.empty(), problems);
    }

    /** The value; throws what is wrong when there is none. */
    public T orElseThrow() throws BadInputException {
        return value.orElseThrow(() -> new BadInputException(problems));
    }
}
