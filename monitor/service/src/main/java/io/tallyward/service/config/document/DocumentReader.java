package io.tallyward.service.config.document;

import com.fasterxml.jackson.core.JsonLocation;
import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.core.JsonToken;
import com.fasterxml.jackson.dataformat.yaml.YAMLFactory;
import com.fasterxml.jackson.dataformat.yaml.YAMLParser;
import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Node.Nothing;
import io.tallyward.service.config.document.Node.Scalar;
import io.tallyward.service.config.document.Node.Sequence;
import java.io.IOException;
import java.io.InputStream;
import java.nio.ByteBuffer;
import java.nio.charset.CharacterCodingException;
import java.nio.charset.StandardCharsets;
import java.nio.file.AccessDeniedException;
import java.nio.file.Files;
import java.nio.file.NoSuchFileException;
import java.nio.file.NotDirectoryException;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.yaml.snakeyaml.error.MarkedYAMLException;

/** Turns a YAML file into nodes, or says why it cannot. */
public final class DocumentReader {

    /** Larger files are refused: a plan or a configuration is a page or two, so 64 kB is ample. */
    public static final int MAX_BYTES = 64_000;

    /** Deeper nesting is refused; the deepest known key is four levels down. */
    public static final int MAX_DEPTH = 12;

    private static final YAMLFactory YAML = new YAMLFactory();

    private final Problems problems;

    /** A reader that adds what is wrong to {@code problems}. */
    public DocumentReader(Problems problems) {
        this.problems = problems;
    }

    /** Reads a file of one mapping; empty when it is none, with the reason in the problems. */
    public Optional<Mapping> read(Path file) {
        return readText(file).flatMap(this::parse);
    }

    /** Parses the text of a file of one mapping; empty when it is none, with the reason in the problems. */
    public Optional<Mapping> parse(String text) {
        try (YAMLParser parser = YAML.createParser(text)) {
            if (parser.nextToken() == null) {
                problems.add(0, "", "the file is empty", "a mapping of keys to values");
                return Optional.empty();
            }
            Node root = node(parser, "", lineOf(parser), 0);
            if (parser.nextToken() != null) {
                throw new Refusal(lineOf(parser), "", "a second document", "one document per file");
            }
            if (root instanceof Mapping mapping) {
                return problems.isEmpty() ? Optional.of(mapping) : Optional.empty();
            }
            problems.add(root.line(), "", root.describe(), "a mapping of keys to values");
        } catch (Refusal refusal) {
            problems.add(refusal.line, refusal.key, refusal.found, refusal.expected);
        } catch (JsonProcessingException e) {
            addSyntaxProblem(e);
        } catch (IOException e) {
            throw new IllegalStateException("reading from memory failed", e);
        }
        return Optional.empty();
    }

    private Optional<String> readText(Path file) {
        if (Files.isDirectory(file)) {
            problems.add(0, "", "a directory", "a YAML file");
            return Optional.empty();
        }
        try (InputStream in = Files.newInputStream(file)) {
            byte[] bytes = in.readNBytes(MAX_BYTES + 1);
            if (bytes.length > MAX_BYTES) {
                problems.add(0, "", "the file is too large", "at most " + MAX_BYTES / 1000 + " kB");
                return Optional.empty();
            }
            return Optional.of(StandardCharsets.UTF_8
                    .newDecoder()
                    .decode(ByteBuffer.wrap(bytes))
                    .toString());
        } catch (CharacterCodingException e) {
            problems.add(0, "", "the bytes are not UTF-8 text", "a YAML file in UTF-8");
        } catch (IOException e) {
            problems.add(0, "", "cannot be read: " + reason(e), "a YAML file");
        }
        return Optional.empty();
    }

    /** Why a file cannot be read, in words that do not repeat its name. */
    public static String reason(IOException failure) {
        if (failure instanceof NoSuchFileException) {
            return "there is no such file";
        }
        if (failure instanceof AccessDeniedException) {
            return "this user may not read it";
        }
        if (failure instanceof NotDirectoryException) {
            return "it is not a directory";
        }
        return String.valueOf(failure.getMessage());
    }

    private Node node(YAMLParser parser, String path, int line, int depth) throws IOException {
        if (depth > MAX_DEPTH) {
            throw new Refusal(line, path, "nested too deeply", "at most " + MAX_DEPTH + " levels");
        }
        if (parser.isCurrentAlias() || parser.getObjectId() != null) {
            throw new Refusal(line, path, "an anchor or alias", "values written out");
        }
        if (parser.getTypeId() != null) {
            throw new Refusal(line, path, "a tag", "values without tags");
        }
        JsonToken token = parser.currentToken();
        if (token == JsonToken.START_OBJECT) {
            return mapping(parser, path, line, depth);
        }
        if (token == JsonToken.START_ARRAY) {
            return sequence(parser, path, line, depth);
        }
        return token == JsonToken.VALUE_NULL ? new Nothing(line) : new Scalar(line, parser.getText());
    }

    private Mapping mapping(YAMLParser parser, String path, int line, int depth) throws IOException {
        Map<String, Node> entries = new LinkedHashMap<>();
        while (parser.nextToken() != JsonToken.END_OBJECT) {
            String key = parser.currentName();
            int keyLine = lineOf(parser);
            parser.nextToken();
            Node value = node(parser, Place.join(path, key), keyLine, depth + 1);
            if (entries.putIfAbsent(key, value) != null) {
                String before = "once; it stands on line " + entries.get(key).line() + " already";
                problems.add(keyLine, Place.join(path, key), "a repeated key", before);
            }
        }
        return new Mapping(line, entries);
    }

    private Sequence sequence(YAMLParser parser, String path, int line, int depth) throws IOException {
        List<Node> items = new ArrayList<>();
        while (parser.nextToken() != JsonToken.END_ARRAY) {
            items.add(node(parser, path + "[" + items.size() + "]", lineOf(parser), depth + 1));
        }
        return new Sequence(line, items);
    }

    private static int lineOf(YAMLParser parser) {
        return lineOf(parser.currentTokenLocation());
    }

    private static int lineOf(JsonLocation location) {
        return location == null ? 0 : Math.max(0, location.getLineNr());
    }

    /** Reports in the parser's own words, without the excerpt of the file that follows them: it may hold a secret. */
    private void addSyntaxProblem(JsonProcessingException e) {
        String reason = e.getOriginalMessage().lines().findFirst().orElse("no reason given");
        int line = lineOf(e.getLocation());
        if (e.getCause() instanceof MarkedYAMLException marked && marked.getProblemMark() != null) {
            reason = marked.getProblem();
            line = marked.getProblemMark().getLine() + 1;
        }
        problems.add(line, "", "not valid YAML: " + reason, "", "Check the indentation, colons and quotes there.");
    }

    private static final class Refusal extends IOException {

        private static final long serialVersionUID = 1L;

        private final int line;
        private final String key;
        private final String found;
        private final String expected;

        Refusal(int line, String key, String found, String expected) {
            super(found);
            this.line = line;
            this.key = key;
            this.found = found;
            this.expected = expected;
        }
    }
}
