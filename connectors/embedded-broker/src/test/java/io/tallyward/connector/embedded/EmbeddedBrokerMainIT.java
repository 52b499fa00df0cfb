package io.tallyward.connector.embedded;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.ByteArrayInputStream;
import java.io.ByteArrayOutputStream;
import java.io.InputStream;
import java.io.PrintStream;
import java.net.InetAddress;
import java.net.ServerSocket;
import java.nio.charset.StandardCharsets;
import java.nio.file.Path;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class EmbeddedBrokerMainIT {

    @TempDir
    Path directory;

    private final ByteArrayOutputStream out = new ByteArrayOutputStream();
    private final ByteArrayOutputStream err = new ByteArrayOutputStream();

    @Test
    void announcesItselfAndStopsWhenItsInputEnds() throws Exception {
        int port;
        try (ServerSocket free = new ServerSocket(0, 1, InetAddress.getByName("127.0.0.1"))) {
            port = free.getLocalPort();
        }
        assertEquals(0, run(new ByteArrayInputStream(new byte[0]), directory.toString(), Integer.toString(port)));
        assertEquals(
                "broker ready at 127.0.0.1:" + port,
                out.toString(StandardCharsets.UTF_8).strip());
    }

    @Test
    void refusesArgumentsItDoesNotKnow() {
        assertEquals(2, run(InputStream.nullInputStream(), "only-a-directory"));
        assertTrue(err.toString(StandardCharsets.UTF_8).startsWith("usage: "));
    }

    private int run(InputStream in, String... arguments) {
        return EmbeddedBrokerMain.run(
                arguments,
                in,
                new PrintStream(out, true, StandardCharsets.UTF_8),
                new PrintStream(err, true, StandardCharsets.UTF_8));
    }
}
