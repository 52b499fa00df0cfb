package io.tallyward.service.command;

import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.json.JsonMapper;
import java.io.PrintWriter;
import java.io.StringWriter;
import java.util.List;
import java.util.Map;
import picocli.CommandLine;

/** One run of the command line inside the test: its exit status and what it wrote. */
record CommandRun(int status, List<String> out, List<String> err) {

    private static final JsonMapper JSON = new JsonMapper();

    static CommandRun of(String... arguments) {
        return of(
                (config, plans) -> {
                    throw new AssertionError("the service was started");
                },
                (properties, topics) -> {
                    throw new AssertionError("the broker was asked");
                },
                () -> {},
                arguments);
    }

    /** A run in which a topic has records. */
    static CommandRun of(TopicReading reading, String... arguments) {
        return of(
                (config, plans) -> {
                    throw new AssertionError("the service was started");
                },
                (properties, topics) -> {
                    throw new AssertionError("the broker was asked");
                },
                reading,
                (properties, topics, from, to, records) -> {
                    throw new AssertionError("the input was read");
                },
                () -> {},
                arguments);
    }

    /** A run that reads topics of a broker. */
    static CommandRun of(TopicLookup lookup, TopicReading reading, InputReading inputs, String... arguments) {
        return of(
                (config, plans) -> {
                    throw new AssertionError("the service was started");
                },
                lookup,
                reading,
                inputs,
                () -> {},
                arguments);
    }

    static CommandRun of(ServiceStarter starter, TopicLookup lookup, StopSignal stop, String... arguments) {
        return of(
                starter,
                lookup,
                (properties, topic, values) -> {
                    throw new AssertionError("a topic was read");
                },
                (properties, topics, from, to, records) -> {
                    throw new AssertionError("the input was read");
                },
                stop,
                arguments);
    }

    private static CommandRun of(
            ServiceStarter starter,
            TopicLookup lookup,
            TopicReading reading,
            InputReading inputs,
            StopSignal stop,
            String... arguments) {
        StringWriter out = new StringWriter();
        StringWriter err = new StringWriter();
        CommandLine commandLine = CommandLineFactory.of(Map.of(), starter, lookup, reading, inputs, stop)
                .setOut(new PrintWriter(out))
                .setErr(new PrintWriter(err));
        int status = commandLine.execute(arguments);
        return new CommandRun(
                status, out.toString().lines().toList(), err.toString().lines().toList());
    }

    /** The lines of standard output, each a JSON object. */
    List<JsonNode> json() {
        return out.stream().map(CommandRun::parse).toList();
    }

    /** The lines of standard output of one type. */
    List<String> ofType(String type) {
        return out.stream()
                .filter(line -> parse(line).path("type").asText().equals(type))
                .toList();
    }

    private static JsonNode parse(String line) {
        try {
            return JSON.readTree(line);
        } catch (JsonProcessingException e) {
            throw new AssertionError("not JSON: " + line, e);
        }
    }
}
