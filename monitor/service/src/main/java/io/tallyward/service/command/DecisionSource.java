package io.tallyward.service.command;

import io.tallyward.connector.format.DecisionJson;
import io.tallyward.connector.format.RecordFormatException;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.config.document.DocumentReader;
import io.tallyward.service.config.document.Problem;
import java.io.IOException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.function.Consumer;
import picocli.CommandLine.Option;
import picocli.CommandLine.Parameters;

/** Where a command takes decision records from: a file, or the topic that a service writes them to. */
final class DecisionSource {

    /** Longer lines are no decision records. */
    private static final int MAX_RECORD_BYTES = 16 << 20;

    @Parameters(
            arity = "0..1",
            paramLabel = "FILE",
            description =
                    "A file of decision records, one JSON object per line, as the topic has them or as replay --json"
                            + " prints them; lines of other types are passed over.")
    private Path file;

    @Option(names = "--topic", description = "Read the topic of decisions instead of a file.")
    private boolean topic;

    @Option(
            names = "--config",
            paramLabel = "FILE",
            description = "With --topic: the configuration of the service that writes it.")
    private Path config;

    /** What becomes of what is read. */
    interface Reader {
        /** Takes the next record. */
        void record(DecisionRecord record);

        /** Takes note of something that is no record. */
        void unreadable(String sentence);
    }

    /** Reads everything; returns how many records there were. */
    long read(Map<String, String> environment, TopicReading reading, Reader reader) throws BadInputException {
        if (topic == (file != null) || topic != (config != null)) {
            throw new BadInputException(List.of(
                    Problem.of("", "where the decisions are", "either a FILE, or --topic with --config FILE", "")));
        }
        Counting counting = new Counting(reader);
        if (topic) {
            ServiceConfig service = new ConfigReader(environment).read(config).orElseThrow();
            Consumer<byte[]> values = value -> counting.take(value, "a record of the topic");
            reading.read(BrokerCheck.clientProperties(service), service.name() + "-decisions", values);
            counting.end("the topic ends in the middle of a record");
        } else {
            readFile(counting);
        }
        return counting.records;
    }

    /** The source as the user named it. */
    String name() {
        return topic ? "the topic of decisions" : file.toString();
    }

    private void readFile(Counting counting) throws BadInputException {
        if (Files.isDirectory(file)) {
            throw unusable("a directory");
        }
        try (EventLines lines = new EventLines(Files.newInputStream(file), MAX_RECORD_BYTES)) {
            for (Optional<byte[]> line = lines.next(); line.isPresent(); line = lines.next()) {
                counting.take(line.get(), file + ", line " + lines.number());
            }
            counting.end(file + " ends in the middle of a record (line " + lines.number() + ")");
        } catch (IOException e) {
            throw unusable("cannot be read: " + DocumentReader.reason(e));
        }
    }

    private BadInputException unusable(String found) {
        return new BadInputException(List.of(
                Problem.of(file.toString(), found, "a file of decision records, one JSON object per line", "")));
    }

    /** Tells the last line, which may be cut short, from others that are no records. */
    private static final class Counting {

        private final Reader reader;
        private String unread = "";
        private boolean cut;
        private long records;

        Counting(Reader reader) {
            this.reader = reader;
        }

        void take(byte[] bytes, String where) {
            flush();
            try {
                Optional<DecisionRecord> record = DecisionJson.readIfDecision(bytes);
                record.ifPresent(reader::record);
                records += record.isPresent() ? 1 : 0;
            } catch (RecordFormatException e) {
                unread = where + " is no decision record of this version: " + e.getMessage();
                cut = e.cutShort();
            }
        }

        void end(String sentence) {
            if (cut && !unread.isEmpty()) {
                unread = sentence + ": copy the file again, it is not complete";
            }
            flush();
        }

        private void flush() {
            if (!unread.isEmpty()) {
                reader.unreadable(unread + ".");
                unread = "";
            }
        }
    }
}
