package io.tallyward.service.plan;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.Checked;
import io.tallyward.service.config.document.DocumentReader;
import io.tallyward.service.config.document.Problem;
import java.io.IOException;
import java.nio.file.DirectoryIteratorException;
import java.nio.file.DirectoryStream;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;

/** Reads a directory of plan files. */
public final class PlanDirectory {

    /** More experiments than this in one instance is a mistake of the directory, not a plan. */
    public static final int MAX_FILES = 1_000;

    private static final String EXPECTED = "a directory with plan files (*.yaml, *.yml)";

    private PlanDirectory() {}

    /**
     * The plans of all {@code *.yaml} and {@code *.yml} files in a directory, in the order of the file names, or
     * everything that is wrong in any of them. Other files, hidden ones and subdirectories are ignored. A directory
     * without a plan is a problem, and so is a second plan for an experiment.
     */
    public static Checked<List<Plan>> read(Path directory) {
        List<Path> files;
        try {
            files = planFiles(directory);
        } catch (IOException | DirectoryIteratorException e) {
            IOException cause = e instanceof DirectoryIteratorException wrapped ? wrapped.getCause() : (IOException) e;
            return refused(directory, "cannot be read: " + DocumentReader.reason(cause));
        }
        if (files.isEmpty()) {
            return refused(directory, "no plan files");
        }
        if (files.size() > MAX_FILES) {
            return refused(directory, files.size() + " plan files, more than the limit of " + MAX_FILES);
        }
        return readAll(files);
    }

    private static Checked<List<Plan>> readAll(List<Path> files) {
        List<Plan> plans = new ArrayList<>();
        List<Problem> problems = new ArrayList<>();
        Map<String, Path> owners = new HashMap<>();
        for (Path file : files) {
            Checked<Plan> checked = PlanReader.read(file);
            problems.addAll(checked.problems());
            checked.value().ifPresent(plan -> {
                Path before = owners.putIfAbsent(plan.experiment(), file);
                if (before != null) {
                    problems.add(new Problem(
                            file.toString(),
                            0,
                            PlanKeys.EXPERIMENT.name(),
                            plan.experiment(),
                            "one plan per experiment; " + before + " has one already",
                            ""));
                }
                plans.add(plan);
            });
        }
        return problems.isEmpty() ? Checked.of(List.copyOf(plans)) : Checked.refused(problems);
    }

    private static List<Path> planFiles(Path directory) throws IOException {
        List<Path> files = new ArrayList<>();
        try (DirectoryStream<Path> entries = Files.newDirectoryStream(directory, "*.{yaml,yml}")) {
            for (Path entry : entries) {
                if (!Files.isDirectory(entry) && !entry.getFileName().toString().startsWith(".")) {
                    files.add(entry);
                }
            }
        }
        files.sort(null);
        return files;
    }

    private static Checked<List<Plan>> refused(Path directory, String found) {
        return Checked.refused(List.of(Problem.of(directory.toString(), found, EXPECTED, "")));
    }
}
