package io.tallyward.demo;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.ToldScenario;
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

    @Test
    void refusesAChaosOfTooFewEventsInOneSentence() {
        assertEquals(DemoCommand.WRONG_ARGUMENTS, run("chaos", "--events", "5"));
        assertEquals(
                "--events: 5 (expected: 100000 to 1000000000). See tallyward-demo chaos --help.",
                said.toString().strip());
    }

    @Test
    void saysFirstWhatIsToCome() {
        Scenario scenario = ToldScenario.withDefaultSeed();
        assertEquals(
                "14 invented days of Northwater in about 90 s: 6 experiments whose truth is known",
                DemoCommand.opening(scenario, 90));
        assertEquals(
                "14 invented days of Northwater as fast as possible: 6 experiments whose truth is known",
                DemoCommand.opening(scenario, 0));
    }

    private int run(String... arguments) {
        CommandLine command = Demo.commandLine();
        command.setErr(new PrintWriter(said));
        return command.execute(arguments);
    }
}
