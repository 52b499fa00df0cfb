package io.tallyward.demo;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.io.PrintWriter;
import java.io.StringWriter;
import org.junit.jupiter.api.Test;
import picocli.CommandLine;

class DemoTest {

    private final StringWriter said = new StringWriter();

    @Test
    void refusesWhatIsNoNumberInOneSentence() {
        assertEquals(DemoCommand.WRONG_ARGUMENTS, run("--seconds", "x"));
        assertEquals(
                "Invalid value for option '--seconds': 'x' is not an int. See tallyward-demo --help.",
                said.toString().strip());
    }

    @Test
    void refusesWhatIsOutOfRangeInOneSentence() {
        assertEquals(DemoCommand.WRONG_ARGUMENTS, run("--port", "70000"));
        assertEquals(
                "--port: 70000 (expected: 0 to 65535). See tallyward-demo --help.",
                said.toString().strip());
    }

    private int run(String... arguments) {
        CommandLine command = Demo.commandLine();
        command.setErr(new PrintWriter(said));
        return command.execute(arguments);
    }
}
