package io.tallyward.service.config.document;

import java.util.Optional;

/** How the value of a key is read. */
public interface ValueType<T> {

    /** Reads the value; empty when it is refused, with the reason in the problems of the place. */
    Optional<T> read(Node node, Place place);

    /** What is expected, in words that complete "expected: ...". */
    String expected();

    /** What a schema can say of the values. */
    Form form();
}
