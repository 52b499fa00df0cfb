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
        assertTrue(
                help.out().contains("Exit status: 0 fine, 1 the answer is no, 2 bad input, 3 broken surroundings."),
                () -> help.out().toString());
    }

    @ParameterizedTest
    @ValueSource(strings = {"watch", "check", "boundaries", "replay"})
    void explainsEachCommand(String command) {
        CommandRun help = CommandRun.of(command, "--help");
        assertEquals(0, help.status());
        assertTrue(
                help.out().stream().anyMatch(line -> line.contains("--json")),
                () -> help.out().toString());
    }

    @Test
    void tellsItsVersion() {
        assertEquals(
                new CommandRun(0, List.of("tallyward development, deciding rules 1"), List.of()),
                CommandRun.of("--version"));
    }

    @Test
    void refusesArgumentsInSentences() {
        assertRefused("Missing required subcommand. See tallyward --help.");
        assertRefused("Unmatched argument at index 0: 'wach'. See tallyward --help.", "wach");
        assertRefused("Missing required option: '--config=FILE'. See tallyward watch --help.", "watch");
        assertRefused(
                "Invalid value for option '--partitions': 0 (expected: whole number from 1 to 4096). "
                        + "See tallyward replay --help.",
                "replay",
                "--plans=p",
                "--events=e",
                "--partitions=0");
        assertRefused(
                "Invalid value for option '--max-skew': 5m (expected: ISO 8601 duration from PT0S to P1D). "
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
