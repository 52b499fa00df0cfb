package io.tallyward.service.config.document;

import java.util.List;
import java.util.stream.Collectors;

/** The user's files cannot be used. The message lists every problem, one to a line. */
public final class BadInputException extends Exception {

    private static final long serialVersionUID = 1L;

    private final transient List<Problem> problems;

    public BadInputException(List<Problem> problems) {
        super(problems.stream().map(Problem::message).collect(Collectors.joining("\n")));
        this.problems = List.copyOf(problems);
    }

    /** What is wrong, in the order of the files; never empty. */
    public List<Problem> problems() {
        return problems;
    }
}
