package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.io.ByteArrayInputStream;
import java.io.IOException;
import java.io.InputStream;
import java.nio.charset.StandardCharsets;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;
import org.junit.jupiter.api.Test;

class EventLinesTest {

    @Test
    void splitsAtLineEndsAndSkipsBlankLines() throws IOException {
        assertEquals(List.of("a", "b", "c"), lines("a\n\nb\r\n \t\n\r\nc"));
        assertEquals(List.of("a"), lines("a\n"));
        assertEquals(List.of(), lines(""));
        assertEquals(List.of(), lines("\n\n"));
    }

    @Test
    void numbersLinesAsAnEditorDoes() throws IOException {
        String text = "\na\n \n123456789012345\r\nb";
        List<Long> numbers = new ArrayList<>();
        try (EventLines lines = new EventLines(new ByteArrayInputStream(text.getBytes(StandardCharsets.UTF_8)), 8)) {
            while (lines.next().isPresent()) {
                numbers.add(lines.number());
            }
        }
        assertEquals(List.of(2L, 4L, 5L), numbers);
    }

    @Test
    void keepsTheBeginningOfLinesThatAreTooLong() throws IOException {
        assertEquals(List.of("12345678", "123456789", "x"), lines("12345678\r\n1234567890123\nx"));
    }

    @Test
    void doesNotCareHowTheBytesArrive() throws IOException {
        String text = "one\ntwo\r\n\nthree\n1234567890123\n";
        InputStream slow = new ByteArrayInputStream(text.getBytes(StandardCharsets.UTF_8)) {
            @Override
            public synchronized int read(byte[] buffer, int from, int length) {
                return super.read(buffer, from, Math.min(length, 1));
            }

            @Override
            public int read(byte[] buffer) {
                return read(buffer, 0, buffer.length);
            }
        };
        assertEquals(lines(text), lines(slow));
    }

    private static List<String> lines(String text) throws IOException {
        return lines(new ByteArrayInputStream(text.getBytes(StandardCharsets.UTF_8)));
    }

    private static List<String> lines(InputStream in) throws IOException {
        List<String> found = new ArrayList<>();
        try (EventLines lines = new EventLines(in, 8)) {
            for (Optional<byte[]> line = lines.next(); line.isPresent(); line = lines.next()) {
                found.add(new String(line.get(), StandardCharsets.UTF_8));
            }
        }
        return found;
    }
}
