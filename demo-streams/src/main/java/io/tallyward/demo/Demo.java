package io.tallyward.demo;

import picocli.CommandLine;

/** Entry point of the demonstration. */
public final class Demo {

    private Demo() {}

    /** Exits with 0 when all checks hold, 1 when not, 2 on wrong arguments and 3 when something could not run. */
    public static void main(String[] arguments) {
        System.setProperty("logback.configurationFile", "io/tallyward/demo/logging.xml");
        CommandLine command = new CommandLine(new DemoCommand());
        command.setExecutionExceptionHandler((failure, line, parsed) -> {
            line.getErr().println("tallyward-demo: " + failure.getMessage());
            for (Throwable cause = failure.getCause(); cause != null; cause = cause.getCause()) {
                line.getErr().println("    because: " + cause);
            }
            return DemoCommand.BROKEN_SURROUNDINGS;
        });
        System.exit(command.execute(arguments));
    }
}
