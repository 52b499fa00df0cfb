package io.tallyward.connector.format;

/** Bytes that should be one of the monitor's own records are not; the message says which record, where, and why. */
public final class RecordFormatException extends IllegalArgumentException {

    private static final long serialVersionUID = 1L;

    RecordFormatException(String message) {
        super(message);
    }
}
