package io.tallyward.demo;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.io.ByteArrayOutputStream;
import java.io.PrintStream;
import java.nio.charset.StandardCharsets;
import org.junit.jupiter.api.Test;

class ScreenTest {

    private final ByteArrayOutputStream shown = new ByteArrayOutputStream();
    private final Screen terminal = new Screen(new PrintStream(shown, true, StandardCharsets.UTF_8), true);

    @Test
    void isSilentAfterTheLastLineButForAlerts() {
        terminal.progress("in day 3", false);
        terminal.lastLine("stopping ...");
        terminal.line("a notice");
        terminal.progress("in day 4", true);
        terminal.alert("could not be stopped");
        assertEquals(
                "in day 3\nstopping ...\ncould not be stopped\n",
                shown.toString(StandardCharsets.UTF_8).replace(System.lineSeparator(), "\n"));
    }
}
