package io.tallyward.service.config.document;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.util.List;
import java.util.Optional;
import org.junit.jupiter.api.Test;

class SuggestionTest {

    private static final Key<Integer> PORT =
            Key.withDefault("port", ScalarType.wholeNumber(0, 65_535), "8087", "Port.");
    private static final Key<String> OWNER = Key.optional("owner", ScalarType.text(20), "Owner.");
    private static final Shape SHAPE = Shape.of(Key.section("http", Shape.of(PORT), "Server."), OWNER);

    /** Levenshtein's own example (1966) and the textbook one; the swap counts once by Damerau (1964). */
    @Test
    void countsSlipsOfTheFinger() {
        assertEquals(0, Suggestion.distance("port", "port"));
        assertEquals(3, Suggestion.distance("kitten", "sitting"));
        assertEquals(1, Suggestion.distance("prot", "port"));
        assertEquals(4, Suggestion.distance("", "port"));
    }

    @Test
    void namesTheSiblingOrTheRightSection() {
        assertEquals(
                List.of("f.yaml:2: http.prot: unknown key (expected: port). Did you mean http.port?"),
                problems("http:\n  prot: 1\n"));
        assertEquals(
                List.of("f.yaml:1: port: unknown key (expected: http, owner). Did you mean http.port?"),
                problems("port: 1\n"));
        assertEquals(List.of("f.yaml:1: colour: unknown key (expected: http, owner)"), problems("colour: blue\n"));
    }

    private static List<String> problems(String text) {
        Problems problems = new Problems("f.yaml");
        Optional<Node.Mapping> root = new DocumentReader(problems).parse(text);
        SHAPE.readRoot(root.orElseThrow(), problems);
        return problems.list().stream().map(Problem::message).toList();
    }
}
