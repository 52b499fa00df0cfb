package io.tallyward.service.config.document;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

/** The syntax is that of YAML 1.2 (yaml.org/spec/1.2.2); what is refused of it is our own choice. */
class DocumentReaderTest {

    @TempDir
    Path directory;

    @Test
    void keepsOrderTextAndLines() {
        Problems problems = new Problems("quay.yaml");
        Optional<Node.Mapping> root = new DocumentReader(problems).parse("b: 0.10\na:\n  - yes\n  - \"7\"\nc: {d: }\n");

        assertEquals(List.of(), problems.list());
        assertEquals(
                new Node.Mapping(
                        1,
                        Map.of(
                                "b", new Node.Scalar(1, "0.10"),
                                "a", new Node.Sequence(2, List.of(new Node.Scalar(3, "yes"), new Node.Scalar(4, "7"))),
                                "c", new Node.Mapping(5, Map.of("d", new Node.Nothing(5))))),
                root.orElseThrow());
        assertEquals(
                List.of("b", "a", "c"), List.copyOf(root.orElseThrow().entries().keySet()));
    }

    @Test
    void refusesBrokenSyntaxWithoutShowingTheFile() {
        assertEquals(
                List.of("quay.yaml:2: not valid YAML: mapping values are not allowed here. "
                        + "Check the indentation, colons and quotes there."),
                refusal("a: 1\n  password: hunter2\n"));
        assertEquals(
                List.of("quay.yaml:2: not valid YAML: found character '\\t(TAB)' that cannot start any token. "
                        + "(Do not use \\t(TAB) for indentation). "
                        + "Check the indentation, colons and quotes there."),
                refusal("a:\n\tb: 1\n"));
    }

    @Test
    void refusesAnythingButOneMapping() {
        assertEquals(List.of("quay.yaml: the file is empty (expected: a mapping of keys to values)"), refusal(""));
        assertEquals(
                List.of("quay.yaml: the file is empty (expected: a mapping of keys to values)"),
                refusal("# only a comment\n"));
        assertEquals(
                List.of("quay.yaml:1: a list (expected: a mapping of keys to values)"), refusal("- quay-banner\n"));
        assertEquals(
                List.of("quay.yaml:3: a second document (expected: one document per file)"),
                refusal("a: 1\n---\nb: 2\n"));
    }

    @Test
    void refusesWhatCouldExpandOrMislead() {
        assertEquals(
                List.of("quay.yaml:1: a: an anchor or alias (expected: values written out)"),
                refusal("a: &x [1, 2]\nb: [*x, *x]\n"));
        assertEquals(List.of("quay.yaml:1: a: an anchor or alias (expected: values written out)"), refusal("a: *x\n"));
        assertEquals(
                List.of("quay.yaml:1: a: a tag (expected: values without tags)"),
                refusal("a: !!java.net.URL [\"https://northwater.example\"]\n"));
        assertEquals(
                List.of("quay.yaml:3: a.c: a repeated key (expected: once; it stands on line 2 already)"),
                refusal("a:\n  c: 1\n  c: 2\n"));
    }

    @Test
    void boundsDepthAndSize() throws IOException {
        String deep = "a: " + "[".repeat(DocumentReader.MAX_DEPTH) + "]".repeat(DocumentReader.MAX_DEPTH);
        assertEquals(List.of(), refusal(deep));
        List<String> deeper = refusal("a: " + "[".repeat(200) + "]".repeat(200));
        assertTrue(deeper.get(0).endsWith("nested too deeply (expected: at most 12 levels)"), deeper.get(0));

        Path large = directory.resolve("large.yaml");
        Files.writeString(large, "a: " + "x".repeat(DocumentReader.MAX_BYTES));
        assertEquals(List.of(large + ": the file is too large (expected: at most 64 kB)"), refusal(large));
    }

    @Test
    void saysWhyAFileCannotBeRead() throws IOException {
        Path missing = directory.resolve("missing.yaml");
        assertEquals(
                List.of(missing + ": cannot be read: there is no such file (expected: a YAML file)"), refusal(missing));
        assertEquals(List.of(directory + ": a directory (expected: a YAML file)"), refusal(directory));

        Path binary = directory.resolve("binary.yaml");
        Files.write(binary, new byte[] {'a', ':', ' ', (byte) 0xff});
        assertEquals(
                List.of(binary + ": the bytes are not UTF-8 text (expected: a YAML file in UTF-8)"), refusal(binary));
    }

    private static List<String> refusal(String text) {
        Problems problems = new Problems("quay.yaml");
        boolean read = new DocumentReader(problems).parse(text).isPresent();
        assertEquals(problems.isEmpty(), read);
        return problems.list().stream().map(Problem::message).toList();
    }

    private static List<String> refusal(Path file) {
        Problems problems = new Problems(file.toString());
        assertEquals(Optional.empty(), new DocumentReader(problems).read(file));
        return problems.list().stream().map(Problem::message).toList();
    }
}
