package io.tallyward.demo;

import io.tallyward.demo.bench.BenchCommand;
import java.io.PrintWriter;
import picocli.CommandLine;
import picocli.CommandLine.ParameterException;

/** Entry point of the demonstration. */
public final class Demo {

    private Demo() {}

    /** Exits with 0 when all checks hold, 1 when not, 2 on wrong arguments and 3 when something could not run. */
    public static void main(String[] arguments) {
        System.setProperty("logback.configurationFile", "io/tallyward/demo/logging.xml");
        System.exit(commandLine().execute(arguments));
    }

    static CommandLine commandLine() {
        CommandLine command = new CommandLine(new DemoCommand());
        command.addSubcommand(new ChaosCommand());
        command.addSubcommand(new BenchCommand());
        command.setParameterExceptionHandler(Demo::refuse);
        command.setExecutionExceptionHandler((failure, line, parsed) -> {
            line.getErr().println("tallyward-demo: " + failure.getMessage());
            for (Throwable cause = failure.getCause(); cause != null; cause = cause.getCause()) {
                line.getErr().println("    because: " + cause);
            }
            return DemoCommand.BROKEN_SURROUNDINGS;
        });
        return command;
    }

    /** One sentence, as the service says it; the whole help would hide it. */
    private static int refuse(ParameterException e, String[] arguments) {
        CommandLine command = e.getCommandLine();
        PrintWriter err = command.getErr();
        err.println(e.getMessage().replaceAll("[.\\s]+$", "") + ". See "
                + command.getCommandSpec().qualifiedName() + " --help.");
        err.flush();
        return DemoCommand.WRONG_ARGUMENTS;
    }
}
