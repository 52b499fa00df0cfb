package io.tallyward.demo.bench;

import io.tallyward.engine.plan.CountRule.CountBy;
import java.nio.file.Path;
import java.util.List;

/**
 * One case as a process: {@code CaseMain CASE DIRECTORY BOOTSTRAP-SERVERS TOPIC PLANS EVENTS WARM-UP RUN}. Prints a line with the
 * measurement and ends.
 */
public final class CaseMain {

    private CaseMain() {}

    /**
     * What a case works on.
     *
     * @param directory where files may be written
     * @param bootstrapServers the broker
     * @param topic what to read, of as many partitions as one likes
     * @param plans directory of the plans
     * @param events events in the topic
     * @param warmUp how many of them come before measuring begins
     * @param run sets groups and topics of this run apart from those of others
     */
    record Task(
            Path directory, String bootstrapServers, String topic, Path plans, long events, long warmUp, String run) {

        /** Main class and arguments of a process that carries out the task by a case. */
        List<String> command(BenchCase which) {
            return List.of(
                    CaseMain.class.getName(),
                    which.code(),
                    directory.toString(),
                    bootstrapServers,
                    topic,
                    plans.toString(),
                    Long.toString(events),
                    Long.toString(warmUp),
                    run);
        }

        private static Task of(String[] arguments) {
            return new Task(
                    Path.of(arguments[1]),
                    arguments[2],
                    arguments[3],
                    Path.of(arguments[4]),
                    Long.parseLong(arguments[5]),
                    Long.parseLong(arguments[6]),
                    arguments[7]);
        }
    }

    /** Exits with 0 when the case was measured and has counted what it should. */
    public static void main(String[] arguments) throws Exception {
        Task task = Task.of(arguments);
        Measurement measurement = switch (BenchCase.of(arguments[0])) {
            case RAW_POLL -> PollCase.measure(task, false);
            case RAW_PARSE -> PollCase.measure(task, true);
            case COUNT_UNIT -> CountCase.measure(task, CountBy.UNIT);
            case COUNT_VIEW -> CountCase.measure(task, CountBy.VIEW);
            case STREAMS_DSL -> StreamsCase.measure(task);
        };
        System.out.println(measurement.line());
        System.exit(0);
    }
}
