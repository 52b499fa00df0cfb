package io.tallyward.service.command;

import io.tallyward.engine.EngineVersion;
import io.tallyward.service.config.document.Suggestion;
import java.io.PrintWriter;
import java.time.InstantSource;
import java.util.Collection;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import picocli.CommandLine;
import picocli.CommandLine.Command;
import picocli.CommandLine.IVersionProvider;
import picocli.CommandLine.Model.CommandSpec;
import picocli.CommandLine.ParameterException;
import picocli.CommandLine.UnmatchedArgumentException;

/** Puts the command line together. */
public final class CommandLineFactory {

    private CommandLineFactory() {}

    @Command(
            name = "tallyward",
            description = "Watches running experiments on a Kafka event pipeline and says when it is fair to stop.",
            mixinStandardHelpOptions = true,
            versionProvider = Version.class,
            footer = {
                "",
                "Exit status: 0 fine, 1 the answer is no (of verify),",
                "2 bad input, 3 broken surroundings.",
                "tallyward COMMAND --help explains a command."
            })
    private static final class Root {}

    private static final class Version implements IVersionProvider {
        @Override
        public String[] getVersion() {
            return new String[] {"tallyward " + version() + ", deciding rules " + EngineVersion.CURRENT};
        }
    }

    /** Version of the program, from the manifest of its jar. */
    public static String version() {
        String release = CommandLineFactory.class.getPackage().getImplementationVersion();
        return release == null ? "development" : release;
    }

    /**
     * The command line of the service.
     *
     * @param environment where secrets may be
     * @param starter starts the service
     * @param lookup asks the brokers about topics
     * @param reading reads topics
     * @param inputs reads input topics once more
     * @param stop tells the service to stop
     */
    public static CommandLine of(
            Map<String, String> environment,
            ServiceStarter starter,
            TopicLookup lookup,
            TopicReading reading,
            InputReading inputs,
            StopSignal stop) {
        return new CommandLine(new Root())
                .addSubcommand(new WatchCommand(environment, starter, stop))
                .addSubcommand(
                        new CheckCommand(environment, new BookCheck.Brokers(lookup, reading), InstantSource.system()))
                .addSubcommand(new BoundariesCommand())
                .addSubcommand(new RehearseCommand())
                .addSubcommand(new ReplayCommand(environment, new InputTopics.Brokers(lookup, reading, inputs)))
                .addSubcommand(new VerifyCommand(environment, reading))
                .addSubcommand(new ExplainCommand(environment, reading))
                .addSubcommand(new SchemaCommand())
                .setParameterExceptionHandler(CommandLineFactory::refuse);
    }

    private static int refuse(ParameterException e, String[] arguments) {
        CommandLine command = e.getCommandLine();
        String name = command.getCommandSpec().qualifiedName();
        PrintWriter err = command.getErr();
        err.println(sentence(e) + " See " + name + " --help.");
        err.flush();
        return ExitCode.BAD_INPUT.status();
    }

    /** A slip in the name of a required option shows as one that is missing and one that is unknown: both are told. */
    private static String sentence(ParameterException e) {
        CommandLine command = e.getCommandLine();
        Optional<String> unknown = command.getUnmatchedArguments().stream()
                .filter(argument -> argument.matches("--?[A-Za-z].*"))
                .map(argument -> argument.replaceFirst("=.*", ""))
                .findFirst()
                .map(option -> unknownOption(option, command.getCommandSpec()));
        if (e instanceof UnmatchedArgumentException unmatched && unmatched.isUnknownOption() && unknown.isPresent()) {
            return unknown.get();
        }
        if (e instanceof UnmatchedArgumentException unmatched
                && !command.getSubcommands().isEmpty()) {
            String written = unmatched.getUnmatched().get(0);
            return "Unknown command: '" + written + "'."
                    + didYouMean(written, command.getSubcommands().keySet());
        }
        String message = e.getMessage().replaceAll("[.\\s]+$", "") + ".";
        return unknown.map(text -> message + " " + text).orElse(message);
    }

    private static String unknownOption(String option, CommandSpec spec) {
        List<String> known = spec.optionsMap().keySet().stream()
                .filter(name -> name.startsWith("--"))
                .toList();
        return "Unknown option: '" + option + "'." + didYouMean(option, known);
    }

    private static String didYouMean(String written, Collection<String> known) {
        return Suggestion.among(written, known)
                .map(name -> " Did you mean " + name + "?")
                .orElse("");
    }
}
