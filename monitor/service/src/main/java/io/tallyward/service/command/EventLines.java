package io.tallyward.service.command;

import java.io.BufferedInputStream;
import java.io.ByteArrayOutputStream;
import java.io.IOException;
import java.io.InputStream;
import java.util.Optional;

/**
 * The lines of a file of events, one JSON document each, read as a stream. Blank lines are skipped. Of a line that is too
 * long only the beginning is kept, one byte more than allowed, so that its reader can tell.
 */
final class EventLines implements AutoCloseable {

    private static final int BUFFER_BYTES = 1 << 16;

    private final InputStream in;
    private final int maxBytes;
    private boolean atEnd;

    /** Lines of {@code in} of at most {@code maxBytes} bytes each, not counting their ends; closes it in the end. */
    EventLines(InputStream in, int maxBytes) {
        this.in = new BufferedInputStream(in, BUFFER_BYTES);
        this.maxBytes = maxBytes;
    }

    /** The next line that is not blank; empty at the end of the file. */
    Optional<byte[]> next() throws IOException {
        while (!atEnd) {
            byte[] line = line();
            if (!isBlank(line)) {
                return Optional.of(line);
            }
        }
        return Optional.empty();
    }

    private byte[] line() throws IOException {
        ByteArrayOutputStream line = new ByteArrayOutputStream(512);
        int last = -1;
        for (int next = in.read(); next != '\n'; next = in.read()) {
            if (next < 0) {
                atEnd = true;
                break;
            }
            if (last >= 0 && line.size() <= maxBytes) {
                line.write(last);
            }
            last = next;
        }
        if (last >= 0 && last != '\r' && line.size() <= maxBytes) {
            line.write(last);
        }
        return line.toByteArray();
    }

    private static boolean isBlank(byte[] line) {
        for (byte character : line) {
            if (character != ' ' && character != '\t') {
                return false;
            }
        }
        return true;
    }

    @Override
    public void close() throws IOException {
        in.close();
    }
}
