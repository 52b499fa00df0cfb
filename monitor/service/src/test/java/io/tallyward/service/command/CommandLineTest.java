package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class CommandLineTest {

    @Test
    void explainsItself() {
        CommandRun help = CommandRun.of("--help");
        assertEquals(0, help.status());
        assertEquals(List.of(), help.err());
        assertEquals(
                List.of(
                        "Exit status: 0 fine, 1 the answer is no (of verify),",
                        "2 bad input, 3 broken surroundings.",
                        "tallyward COMMAND --help explains a command."),
                help.out().subList(help.out().size() - 3, help.out().size()));
    }

    @ParameterizedTest
    @ValueSource(strings = {"watch", "check", "boundaries", "rehearse", "replay"})
    void explainsEachCommand(String command) {
        CommandRun help = CommandRun.of(command, "--help");
        assertEquals(0, help.status());
        assertTrue(
                help.out().stream().anyMatch(line -> line.contains("--json")),
                () -> help.out().toString());
    }

    @Test
    void saysHowEachCommandEnds() {
        assertEnds(
                "watch",
                "  0   It was told to stop, and stopped in good order.",
                "  2   An argument, the configuration or a plan cannot be used, or contradicts",
                "        what was counted under it before.",
                "  3   A broker, a port or something else around it is not as it has to be.");
        assertEnds(
                "check",
                "  0   Nothing is wrong.",
                "  2   An argument, the configuration or a plan cannot be used, or a plan would",
                "        be refused.",
                "  3   The broker does not answer or refuses, or an input topic is not as it has",
                "        to be.");
        assertEnds(
                "boundaries",
                "  0   The design is shown.",
                "  2   An argument or the plan cannot be used.",
                "  3   Something unforeseen happened.");
        assertEnds(
                "rehearse",
                "  0   The runs are done and summed up.",
                "  2   An argument or the plan cannot be used.",
                "  3   Something unforeseen happened.");
        assertEnds(
                "replay",
                "  0   The input was read to its end; rejected records are told and change",
                "        nothing here.",
                "  2   An argument, a plan, the configuration or the file of events cannot be",
                "        used.",
                "  3   The broker does not answer or refuses.");
    }

    private static void assertEnds(String command, String... lines) {
        List<String> out = CommandRun.of(command, "--help").out();
        int heading = out.indexOf("Exit status:");
        assertEquals(List.of(lines), out.subList(heading + 1, out.size()));
    }

    @Test
    void namesOptionsItDoesNotKnow() {
        assertRefused(
                "Missing required option: '--config=FILE'. Unknown option: '--confg'. Did you mean --config? "
                        + "See tallyward watch --help.",
                "watch",
                "--confg",
                "x");
        assertRefused(
                "Missing required option: '--config=FILE'. Unknown option: '-c'. See tallyward check --help.",
                "check",
                "-c",
                "x");
        assertRefused(
                "Unknown option: '--jsn'. Did you mean --json? See tallyward watch --help.",
                "watch",
                "--config=x",
                "--jsn=yes");
        assertRefused("Unmatched argument at index 3: 'y'. See tallyward watch --help.", "watch", "--config", "x", "y");
    }

    @Test
    void tellsItsVersion() {
        assertEquals(
                new CommandRun(0, List.of("tallyward development, deciding rules 4"), List.of()),
                CommandRun.of("--version"));
    }

    @Test
    void refusesArgumentsInSentences() {
        assertRefused("Missing required subcommand. See tallyward --help.");
        assertRefused("Unknown command: 'wach'. Did you mean watch? See tallyward --help.", "wach");
        assertRefused("Unknown command: 'stop'. See tallyward --help.", "stop");
        assertRefused(
                "Invalid value for option '--seed': x (expected: whole number from -9223372036854775808 to "
                        + "9223372036854775807). See tallyward rehearse --help.",
                "rehearse",
                "--plan=p",
                "--seed=x");
        assertRefused("Missing required option: '--config=FILE'. See tallyward watch --help.", "watch");
        assertRefused(
                "Invalid value for option '--partitions': 0 (expected: whole number from 1 to 4096). "
                        + "See tallyward replay --help.",
                "replay",
                "--plans=p",
                "--events=e",
                "--partitions=0");
        assertRefused(
                "Invalid value for option '--max-skew': 5m (expected: ISO 8601 duration from PT0S to P1D, such as PT6H). "
                        + "See tallyward replay --help.",
                "replay",
                "--plans=p",
                "--events=e",
                "--max-skew=5m");
    }

    private static void assertRefused(String sentence, String... arguments) {
        assertEquals(new CommandRun(2, List.of(), List.of(sentence)), CommandRun.of(arguments));
    }
}
