package io.tallyward.demo.chaos;

import com.fasterxml.jackson.databind.JsonNode;
import io.tallyward.demo.check.Finding;
import io.tallyward.demo.check.MonitorApi;
import io.tallyward.demo.check.MonitorApi.Standing;
import java.io.IOException;
import java.nio.file.Path;
import java.time.Duration;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalInt;
import java.util.TreeMap;

/** The instances of one monitor: they share its name, and with it the work. Thread-safe. */
final class Fleet implements AutoCloseable {

    /** What a monitor may take to commit, deliver and leave; the orchestrators' usual patience is 30 seconds. */
    private static final Duration STOP_PATIENCE = Duration.ofSeconds(28);

    /** What the JVM returns when it is told to stop before it has begun. */
    private static final int STOPPED_WHILE_STARTING = 143;

    private static final int MOST_FALLEN = 5;

    private final String name;
    private final Path directory;
    private final Path configuration;
    private final List<Instance> instances = new ArrayList<>();
    private final List<String> unexpected = new ArrayList<>();
    private final List<String> disorderly = new ArrayList<>();
    private int starts;
    private boolean closed;

    Fleet(String name, Path directory, Path configuration) {
        this.name = name;
        this.directory = directory;
        this.configuration = configuration;
    }

    /** Starts one more instance and does not wait for it. */
    synchronized Instance add(Path itsConfiguration) throws IOException {
        if (closed) {
            throw new IllegalStateException(name + ": not started, for the run is being stopped");
        }
        starts++;
        String instance = name + "-" + starts;
        Instance started = Instance.start(instance, directory.resolve(instance + ".log"), itsConfiguration);
        instances.add(started);
        return started;
    }

    synchronized Instance add() throws IOException {
        return add(configuration);
    }

    synchronized int size() {
        return instances.size();
    }

    /** Those that are not frozen. */
    synchronized List<Instance> awake() {
        return instances.stream().filter(instance -> !instance.isFrozen()).toList();
    }

    synchronized boolean anyFrozen() {
        return instances.stream().anyMatch(Instance::isFrozen);
    }

    void kill(Instance victim) throws InterruptedException {
        remove(victim);
        victim.process().kill();
    }

    /** Tells an instance to stop and waits for it. */
    void terminate(Instance victim) throws InterruptedException {
        remove(victim);
        OptionalInt code = victim.process().terminate(STOP_PATIENCE);
        if (code.isEmpty()) {
            note(
                    disorderly,
                    victim.name() + ": told to stop, it was still there after " + STOP_PATIENCE.toSeconds() + " s");
            victim.process().kill();
        } else if (code.getAsInt() != 0 && code.getAsInt() != STOPPED_WHILE_STARTING) {
            note(disorderly, victim.name() + ": told to stop, it ended with code " + code.getAsInt());
        }
    }

    private synchronized void remove(Instance victim) {
        instances.remove(victim);
    }

    private synchronized void note(List<String> sentences, String sentence) {
        sentences.add(sentence);
    }

    /** Notes which instances have ended without being told, and starts others in their place. */
    synchronized void replaceFallen() throws IOException {
        for (Instance instance : List.copyOf(instances)) {
            if (!instance.process().isAlive()) {
                unexpected.add(instance.name() + " has ended by itself"
                        + instance.process().tail());
                instances.remove(instance);
                if (unexpected.size() > MOST_FALLEN) {
                    throw new IllegalStateException(name + ": its instances keep ending by themselves; "
                            + unexpected.get(unexpected.size() - 1));
                }
                add();
            }
        }
    }

    List<Finding> findings() {
        synchronized (this) {
            return List.of(
                    new Finding("instances that ended by themselves", unexpected),
                    new Finding("instances that were told to stop", disorderly));
        }
    }

    /** What each input partition's owner has counted; empty unless every partition has exactly one owner. */
    Optional<Map<Integer, JsonNode>> partitions(int expected) {
        Map<Integer, JsonNode> all = new TreeMap<>();
        int owners = 0;
        for (MonitorApi api : apis()) {
            Map<Integer, JsonNode> its = api.partitions();
            owners += its.size();
            all.putAll(its);
        }
        return owners == expected && all.size() == expected ? Optional.of(all) : Optional.empty();
    }

    /** Where the experiments stand by the word of those who decide. */
    Map<String, Standing> standings() {
        Map<String, Standing> standings = new HashMap<>();
        apis().forEach(api -> standings.putAll(api.standings()));
        return standings;
    }

    private List<MonitorApi> apis() {
        return awake().stream().flatMap(instance -> instance.api().stream()).toList();
    }

    synchronized String tail() {
        return instances.isEmpty() ? "" : instances.get(0).process().tail();
    }

    @Override
    public void close() {
        stopWithin(STOP_PATIENCE);
    }

    /** Stops all instances, by force those that take longer. */
    void stopWithin(Duration patience) {
        List<Instance> open;
        synchronized (this) {
            closed = true;
            open = List.copyOf(instances);
            instances.clear();
        }
        open.forEach(instance -> instance.process().stopWithin(patience));
    }
}
