package io.tallyward.demo;

import java.io.IOException;
import java.io.UncheckedIOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.Comparator;
import java.util.List;
import java.util.stream.Stream;

/** Where the demo puts its files. A temporary directory disappears with the demo, a named one stays. Thread-safe. */
public final class WorkDirectory implements AutoCloseable {

    private final Path path;
    private final boolean temporary;

    private WorkDirectory(Path path, boolean temporary) {
        this.path = path;
        this.temporary = temporary;
    }

    /**
     * Opens a directory.
     *
     * @param keepOrNull a directory to keep, which must be empty or absent; null for a temporary one
     */
    public static WorkDirectory open(Path keepOrNull) throws IOException {
        if (keepOrNull == null) {
            return new WorkDirectory(Files.createTempDirectory("tallyward-demo-"), true);
        }
        Files.createDirectories(keepOrNull);
        try (Stream<Path> content = Files.list(keepOrNull)) {
            if (content.findAny().isPresent()) {
                throw new IllegalStateException(
                        "--keep: " + keepOrNull + " is not empty (expected: an empty or a new directory)");
            }
        }
        return new WorkDirectory(keepOrNull.toAbsolutePath(), false);
    }

    public Path path() {
        return path;
    }

    @Override
    public synchronized void close() {
        if (!temporary || !Files.exists(path)) {
            return;
        }
        try (Stream<Path> content = Files.walk(path)) {
            List<Path> deepestFirst = content.sorted(Comparator.reverseOrder()).toList();
            for (Path entry : deepestFirst) {
                Files.deleteIfExists(entry);
            }
        } catch (IOException e) {
            throw new UncheckedIOException("the temporary directory " + path + " could not be removed; remove it", e);
        }
    }
}
