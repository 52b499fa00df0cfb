package io.tallyward.service.command;

import io.tallyward.service.config.document.BadInputException;
import java.util.concurrent.Callable;
import picocli.CommandLine.Model.CommandSpec;
import picocli.CommandLine.Option;
import picocli.CommandLine.Spec;

/** What all commands share: how to write, and how trouble becomes an exit code. */
abstract class CommandBase implements Callable<Integer> {

    @Spec
    private CommandSpec spec;

    @Option(names = "--json", description = "Write one JSON object per line instead of text, problems included.")
    private boolean json;

    /** Does the work. */
    abstract ExitCode run(Output output) throws Exception;

    @Override
    public final Integer call() {
        Output output =
                new Output(spec.commandLine().getOut(), spec.commandLine().getErr(), json);
        try {
            return run(output).status();
        } catch (BadInputException e) {
            output.problems(e.problems());
            return ExitCode.BAD_INPUT.status();
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
            output.problem("Interrupted before the end.");
            return ExitCode.BROKEN_SURROUNDINGS.status();
        } catch (Exception e) {
            output.problem(sentence(e));
            return ExitCode.BROKEN_SURROUNDINGS.status();
        }
    }

    /** The message alone where it was written for operators, with the name of the trouble where it was not. */
    private static String sentence(Exception e) {
        boolean written = e instanceof SurroundingsException
                || e.getClass().getName().startsWith("io.tallyward.") && e.getMessage() != null;
        return written ? e.getMessage() : "Something unforeseen happened: " + e;
    }
}
