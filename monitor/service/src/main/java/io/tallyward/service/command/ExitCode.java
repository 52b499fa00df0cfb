package io.tallyward.service.command;

/** What a command's exit status means. The numbers are published and stable. */
public enum ExitCode {
    /** Everything is fine. */
    FINE(0),
    /** The command worked, and the answer to its question is no. */
    ANSWER_IS_NO(1),
    /** The input (arguments, configuration, plans, events) cannot be used. */
    BAD_INPUT(2),
    /** The input is fine but the surroundings are not: a broker, a port, a disk. */
    BROKEN_SURROUNDINGS(3);

    /** Stands above the list of codes in the help of a command. */
    static final String HEADING = "%nExit status:%n";

    private final int status;

    ExitCode(int status) {
        this.status = status;
    }

    /** The process exit status. */
    public int status() {
        return status;
    }
}
