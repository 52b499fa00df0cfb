package io.tallyward.service.plan;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.Problem;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.List;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class PlanDirectoryTest {

    @TempDir
    Path directory;

    @Test
    void readsPlansInTheOrderOfTheirFiles() throws Exception {
        write("b.yaml", PlanReaderTest.MINIMAL);
        write("a.yml", PlanReaderTest.MINIMAL.replace("quay-banner", "fare-chip"));
        write("notes.txt", "not a plan");
        write(".hidden.yaml", "not a plan");
        Files.createDirectory(directory.resolve("old.yaml"));

        assertEquals(
                List.of("fare-chip", "quay-banner"),
                PlanDirectory.read(directory).orElseThrow().stream()
                        .map(Plan::experiment)
                        .toList());
    }

    @Test
    void reportsTheProblemsOfAllFiles() throws IOException {
        Path first = write("a.yaml", PlanReaderTest.MINIMAL);
        Path second = write("b.yaml", PlanReaderTest.MINIMAL.replace("0.05", "0.5"));
        Path third = write("c.yaml", PlanReaderTest.MINIMAL);
        assertEquals(
                List.of(
                        second + ":5: test.alpha: 0.5 (expected: number from 1e-9 to below 0.5)",
                        third + ": experiment: quay-banner (expected: one plan per experiment; " + first
                                + " has one already)"),
                problems(directory));
    }

    @Test
    void wantsAtLeastOnePlan() {
        assertEquals(
                List.of(directory + ": no plan files (expected: a directory with plan files (*.yaml, *.yml))"),
                problems(directory));
        Path missing = directory.resolve("plans");
        assertEquals(
                List.of(missing + ": cannot be read: there is no such file "
                        + "(expected: a directory with plan files (*.yaml, *.yml))"),
                problems(missing));
    }

    @Test
    void saysWhenTheDirectoryIsAFile() throws IOException {
        Path file = write("a.yaml", PlanReaderTest.MINIMAL);
        assertEquals(
                List.of(file + ": cannot be read: it is not a directory "
                        + "(expected: a directory with plan files (*.yaml, *.yml))"),
                problems(file));
    }

    private static List<String> problems(Path directory) {
        return PlanDirectory.read(directory).problems().stream()
                .map(Problem::message)
                .toList();
    }

    private Path write(String name, String text) throws IOException {
        return Files.writeString(directory.resolve(name), text);
    }
}
