package io.tallyward.demo.bench;

/**
 * One run of one case.
 *
 * @param events events dealt with
 * @param cpuSeconds CPU time of the process, user and system
 * @param wallSeconds how long it took
 */
record Measurement(long events, double cpuSeconds, double wallSeconds) {

    private static final String MARK = "measured";
    private static final double MILLION = 1e6;

    double cpuSecondsPerMillion() {
        return cpuSeconds / events * MILLION;
    }

    double eventsPerSecond() {
        return events / wallSeconds;
    }

    /** As a line of output. */
    String line() {
        return MARK + " " + events + " " + cpuSeconds + " " + wallSeconds;
    }

    /** What {@link #line} said somewhere in a text. */
    static Measurement in(String output) {
        String[] words = output.lines()
                .filter(line -> line.startsWith(MARK + " "))
                .reduce((first, last) -> last)
                .orElseThrow(() -> new IllegalStateException("a case has ended without a measurement"))
                .split(" ");
        return new Measurement(Long.parseLong(words[1]), Double.parseDouble(words[2]), Double.parseDouble(words[3]));
    }
}
