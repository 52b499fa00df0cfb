package io.tallyward.connector.format;

/** Bytes that should be one of the monitor's own records are not; the message says which record, where, and why. */
public final class RecordFormatException extends IllegalArgumentException {

    private static final long serialVersionUID = 1L;

    private final boolean cutShort;

    RecordFormatException(String message) {
        this(message, false);
    }

    RecordFormatException(String message, boolean cutShort) {
        super(message);
        this.cutShort = cutShort;
    }

    /** Whether the bytes end in the middle of a document. */
    public boolean cutShort() {
        return cutShort;
    }
}
