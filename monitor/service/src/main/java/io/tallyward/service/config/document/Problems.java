package io.tallyward.service.config.document;

import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;

/** Collects what is wrong with one file; not thread-safe. */
public final class Problems {

    private final String file;
    private final List<Problem> found = new ArrayList<>();

    /** Starts an empty collection for a file, named as the user named it. */
    public Problems(String file) {
        this.file = file;
    }

    public void add(int line, String key, String found, String expected, String remedy) {
        this.found.add(new Problem(file, line, key, found, expected, remedy));
    }

    public void add(int line, String key, String found, String expected) {
        add(line, key, found, expected, "");
    }

    public boolean isEmpty() {
        return found.isEmpty();
    }

    /** How many problems there are so far. */
    public int size() {
        return found.size();
    }

    /** The problems in the order of the file; those without a line come first. */
    public List<Problem> list() {
        return found.stream().sorted(Comparator.comparingInt(Problem::line)).toList();
    }
}
