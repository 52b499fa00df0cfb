package io.tallyward.demo.bench;

import java.nio.file.Path;

/**
 * One case as a process: {@code CaseMain CASE DIRECTORY BOOTSTRAP-SERVERS EVENTS WARM-UP RUN}. Prints a line with the
 * measurement and ends.
 */
public final class CaseMain {

    private CaseMain() {}

    /**
     * What a case works on.
     *
     * @param directory where the plans are and files may be written
     * @param bootstrapServers the broker
     * @param events events in the topic
     * @param warmUp how many of them come before measuring begins
     * @param run sets groups and topics of this run apart from those of others
     */
    record Task(Path directory, String bootstrapServers, long events, long warmUp, String run) {}

    /** Exits with 0 when the case was measured and has counted what it should. */
    public static void main(String[] arguments) throws Exception {
        Task task = new Task(
                Path.of(arguments[1]),
                arguments[2],
                Long.parseLong(arguments[3]),
                Long.parseLong(arguments[4]),
                arguments[5]);
        Measurement measurement = switch (BenchCase.of(arguments[0])) {
            case RAW_POLL -> PollCase.measure(task, false);
            case RAW_PARSE -> PollCase.measure(task, true);
            case COUNT_UNIT -> CountCase.measure(task);
            case STREAMS_DSL -> StreamsCase.measure(task);
        };
        System.out.println(measurement.line());
        System.exit(0);
    }
}
