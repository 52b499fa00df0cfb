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
import java.nio.file.attribute.BasicFileAttributes;
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
            return refused(directory, "cannot be read: " + DocumentReader.reason(cause(e)));
        }
        if (files.isEmpty()) {
            return refused(directory, "no plan files");
        }
        if (files.size() > MAX_FILES) {
            return refused(directory, files.size() + " plan files, more than the limit of " + MAX_FILES);
        }
        Contents contents = contents(files);
        return contents.problems().isEmpty() ? Checked.of(contents.plans()) : Checked.refused(contents.problems());
    }

    /**
     * What the files of a directory say, as far as they can be used. A plan whose experiment another file plans too is left out.
     *
     * @param plans the usable plans, in the order of the file names
     * @param problems everything that is wrong in any of the files
     */
    public record Contents(List<Plan> plans, List<Problem> problems) {
        public Contents {
            plans = List.copyOf(plans);
            problems = List.copyOf(problems);
        }
    }

    /** The same as {@link #read}, without giving up what can be used for what cannot. */
    public static Contents readUsable(Path directory) {
        try {
            List<Path> files = planFiles(directory);
            return files.size() > MAX_FILES
                    ? new Contents(
                            List.of(),
                            refused(directory, files.size() + " plan files, more than the limit of " + MAX_FILES)
                                    .problems())
                    : contents(files);
        } catch (IOException | DirectoryIteratorException e) {
            return new Contents(
                    List.of(),
                    refused(directory, "cannot be read: " + DocumentReader.reason(cause(e)))
                            .problems());
        }
    }

    private static IOException cause(Exception e) {
        return e instanceof DirectoryIteratorException wrapped ? wrapped.getCause() : (IOException) e;
    }

    private static Contents contents(List<Path> files) {
        List<Plan> plans = new ArrayList<>();
        List<Problem> problems = new ArrayList<>();
        Map<String, Path> owners = new HashMap<>();
        for (Path file : files) {
            Checked<Plan> checked = PlanReader.read(file);
            problems.addAll(checked.problems());
            checked.value().ifPresent(plan -> {
                Path before = owners.putIfAbsent(plan.experiment(), file);
                if (before == null) {
                    plans.add(plan);
                } else {
                    problems.add(new Problem(
                            file.toString(),
                            0,
                            PlanKeys.EXPERIMENT.name(),
                            plan.experiment(),
                            "one plan per experiment; " + before + " has one already",
                            ""));
                }
            });
        }
        return new Contents(plans, problems);
    }

    /**
     * Something that differs whenever the files of a directory may say something else: names, sizes, times and what links lead
     * to. A directory that cannot be read has a print of its own.
     */
    public static String print(Path directory) {
        StringBuilder print = new StringBuilder();
        try {
            for (Path file : planFiles(directory)) {
                BasicFileAttributes attributes = Files.readAttributes(file, BasicFileAttributes.class);
                print.append(file.toRealPath())
                        .append(' ')
                        .append(attributes.size())
                        .append(' ')
                        .append(attributes.lastModifiedTime())
                        .append(' ')
                        .append(attributes.fileKey())
                        .append('\n');
            }
        } catch (IOException | DirectoryIteratorException e) {
            return "unreadable: " + cause(e);
        }
        return print.toString();
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
