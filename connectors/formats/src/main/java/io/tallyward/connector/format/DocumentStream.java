package io.tallyward.connector.format;

import java.io.InputStream;

/** One document after another, each of which has to be set before it is read. Not thread-safe. */
final class DocumentStream extends InputStream {

    private byte[] bytes = new byte[0];
    private int at;
    private int end;

    /** Begins the next document: the first bytes of an array. */
    void set(byte[] document, int length) {
        bytes = document;
        at = 0;
        end = length;
    }

    /** How many bytes of the document have not been read. */
    @Override
    public int available() {
        return end - at;
    }

    @Override
    public int read() {
        return at == end ? -1 : bytes[at++] & 0xff;
    }

    @Override
    public int read(byte[] target, int offset, int most) {
        int count = Math.min(most, end - at);
        if (count == 0) {
            return -1;
        }
        System.arraycopy(bytes, at, target, offset, count);
        at += count;
        return count;
    }
}
