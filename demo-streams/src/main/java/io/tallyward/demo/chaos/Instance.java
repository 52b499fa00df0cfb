package io.tallyward.demo.chaos;

import io.tallyward.demo.check.MonitorApi;
import io.tallyward.demo.child.ChildProcess;
import io.tallyward.demo.child.TiedToParent;
import java.io.IOException;
import java.nio.file.Path;
import java.util.List;
import java.util.Optional;
import java.util.regex.Matcher;
import java.util.regex.Pattern;

/** One running instance of the monitor. Not thread-safe. */
final class Instance {

    private static final String MAIN = "io.tallyward.service.Tallyward";
    private static final Pattern ADDRESS = Pattern.compile("health at http://[^:]+:(\\d+)/");

    /** Many instances start on few cores, and none lives long enough for the second compiler to pay. */
    private static final List<String> OPTIONS = List.of("-Xmx512m", "-XX:+UseSerialGC", "-XX:TieredStopAtLevel=1");

    private final String name;
    private final ChildProcess process;
    private MonitorApi api;
    private long frozenUntilNanos;

    private Instance(String name, ChildProcess process) {
        this.name = name;
        this.process = process;
        frozenUntilNanos = System.nanoTime();
    }

    static Instance start(String name, Path log, Path configuration) throws IOException {
        return new Instance(
                name,
                ChildProcess.start(
                        name,
                        log,
                        OPTIONS,
                        List.of(TiedToParent.class.getName(), MAIN, "watch", "--config", configuration.toString())));
    }

    String name() {
        return name;
    }

    ChildProcess process() {
        return process;
    }

    /** Its API; empty until it has said where. */
    Optional<MonitorApi> api() {
        if (api == null) {
            Matcher address = ADDRESS.matcher(process.output());
            if (address.find()) {
                api = new MonitorApi(Integer.parseInt(address.group(1)));
            }
        }
        return Optional.ofNullable(api);
    }

    void freeze(int seconds) throws IOException {
        process.freeze(seconds);
        frozenUntilNanos = System.nanoTime() + seconds * 1_000_000_000L;
    }

    boolean isFrozen() {
        return System.nanoTime() < frozenUntilNanos;
    }
}
