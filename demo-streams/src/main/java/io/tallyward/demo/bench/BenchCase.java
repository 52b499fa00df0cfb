package io.tallyward.demo.bench;

/** The ways of reading the same topic that are compared. */
enum BenchCase {
    /** A consumer that only counts the records it is given: what reading costs at all. */
    RAW_POLL("raw-poll"),
    /** The same, and every record is read as an event. */
    RAW_PARSE("raw-parse"),
    /** Counting by unit as the service does it: ledger, durable state, a transaction every second. */
    COUNT_UNIT("count-unit"),
    /** The same host, counting by view. */
    COUNT_VIEW("count-view"),
    /** A windowed count of all events, duplicates included, in a few lines of the Kafka Streams DSL, exactly once. */
    STREAMS_DSL("streams-dsl");

    private final String code;

    BenchCase(String code) {
        this.code = code;
    }

    /** Its published name. */
    String code() {
        return code;
    }

    static BenchCase of(String code) {
        for (BenchCase candidate : values()) {
            if (candidate.code.equals(code)) {
                return candidate;
            }
        }
        throw new IllegalArgumentException(
                "case: " + code + " (expected: raw-poll, raw-parse, count-unit, count-view or streams-dsl)");
    }
}
