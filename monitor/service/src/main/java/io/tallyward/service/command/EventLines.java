package io.tallyward.service.command;

import java.io.ByteArrayOutputStream;
import java.io.IOException;
import java.io.InputStream;
import java.util.Arrays;
import java.util.Optional;

/**
 * The lines of a file of events, one JSON document each, read as a stream. Blank lines are skipped. Of a line that is too
 * long only the beginning is kept, one byte more than allowed, so that its reader can tell.
 */
final class EventLines implements AutoCloseable {

    private final InputStream in;
    private final int maxBytes;
    private final byte[] buffer = new byte[1 << 16];
    private long number;
    private int from;
    private int to;

    /** Lines of {@code in} of at most {@code maxBytes} bytes each, not counting their ends; closes it in the end. */
    EventLines(InputStream in, int maxBytes) {
        this.in = in;
        this.maxBytes = maxBytes;
    }

    /** The next line that is not blank; empty at the end of the file. */
    Optional<byte[]> next() throws IOException {
        while (from < to || fill()) {
            byte[] line = line();
            number++;
            if (!isBlank(line)) {
                return Optional.of(line);
            }
        }
        return Optional.empty();
    }

    /** Where the last line stands in the file, from 1; blank lines count. */
    long number() {
        return number;
    }

    private byte[] line() throws IOException {
        ByteArrayOutputStream line = new ByteArrayOutputStream(512);
        boolean ended = false;
        while (!ended && (from < to || fill())) {
            int end = from;
            while (end < to && buffer[end] != '\n') {
                end++;
            }
            ended = end < to;
            line.write(buffer, from, Math.min(end - from, maxBytes + 2 - line.size()));
            from = ended ? end + 1 : end;
        }
        return withoutReturn(line.toByteArray());
    }

    private boolean fill() throws IOException {
        from = 0;
        to = Math.max(0, in.read(buffer));
        return to > 0;
    }

    /** Windows ends its lines with a carriage return before the line feed; it is no part of the document. */
    private byte[] withoutReturn(byte[] line) {
        int length = line.length > 0 && line[line.length - 1] == '\r' ? line.length - 1 : line.length;
        return Arrays.copyOf(line, Math.min(length, maxBytes + 1));
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
