package io.tallyward.service.plan;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.nio.file.StandardCopyOption;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class PlanDirectoryPrintTest {

    @TempDir
    private Path directory;

    private String print() {
        return PlanDirectory.print(directory);
    }

    private void write(String name, String text) throws IOException {
        Files.writeString(directory.resolve(name), text);
    }

    @Test
    void differsOnceAFileComesChangesOrGoes() throws IOException {
        String empty = print();
        write("quay-banner.yaml", "experiment: quay-banner\n");
        String one = print();
        assertNotEquals(empty, one);
        assertEquals(one, print());
        write("quay-banner.yaml", "experiment: quay-banner # longer\n");
        String changed = print();
        assertNotEquals(one, changed);
        write("notes.txt", "nothing to do with it");
        assertEquals(changed, print());
        Files.delete(directory.resolve("quay-banner.yaml"));
        assertEquals(empty, print());
    }

    /** As a Kubernetes ConfigMap is mounted: files are links through a link that is swapped for a new directory. */
    @Test
    void differsWhenALinkOnTheWayIsSwapped() throws IOException {
        Path first = Files.createDirectory(directory.resolve("..2026_05_04"));
        Path second = Files.createDirectory(directory.resolve("..2026_05_05"));
        Files.writeString(first.resolve("quay-banner.yaml"), "owner: a\n");
        Files.writeString(second.resolve("quay-banner.yaml"), "owner: b\n");
        Files.setLastModifiedTime(
                second.resolve("quay-banner.yaml"), Files.getLastModifiedTime(first.resolve("quay-banner.yaml")));
        Path data = directory.resolve("..data");
        Files.createSymbolicLink(data, first.getFileName());
        Files.createSymbolicLink(directory.resolve("quay-banner.yaml"), Path.of("..data", "quay-banner.yaml"));
        String before = print();

        Path next = directory.resolve("..data_tmp");
        Files.createSymbolicLink(next, second.getFileName());
        Files.move(next, data, StandardCopyOption.ATOMIC_MOVE, StandardCopyOption.REPLACE_EXISTING);

        assertNotEquals(before, print());
    }

    @Test
    void usesWhatCanBeUsedAndSaysWhatCannot() throws IOException {
        write("a.yaml", PlanReaderTest.MINIMAL);
        write("b.yaml", "experiment: [");
        write("c.yaml", PlanReaderTest.MINIMAL);

        PlanDirectory.Contents contents = PlanDirectory.readUsable(directory);

        assertEquals(1, contents.plans().size());
        assertEquals(2, contents.problems().size(), contents.problems().toString());
        assertTrue(contents.problems().get(1).message().contains("one plan per experiment"));
    }

    @Test
    void aDirectoryThatIsGoneIsAProblemAndNoFailure() throws IOException {
        Files.delete(directory);

        assertTrue(print().startsWith("unreadable"), print());
        assertEquals(1, PlanDirectory.readUsable(directory).problems().size());
    }
}
