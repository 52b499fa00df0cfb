package io.tallyward.service.metrics;

import io.micrometer.core.instrument.MeterRegistry;
import io.micrometer.core.instrument.binder.jvm.JvmGcMetrics;
import io.micrometer.core.instrument.binder.jvm.JvmMemoryMetrics;
import io.micrometer.core.instrument.binder.jvm.JvmThreadMetrics;
import io.micrometer.core.instrument.binder.system.FileDescriptorMetrics;
import io.micrometer.core.instrument.binder.system.ProcessorMetrics;
import io.micrometer.core.instrument.binder.system.UptimeMetrics;
import io.micrometer.core.instrument.config.MeterFilter;
import java.util.Set;

/** Memory, garbage collection, threads, processor time and open files of the process, under Micrometer's own names. */
public final class ProcessMeters implements AutoCloseable {

    /** Meters whose Prometheus names break the naming rules (a unit in short form, a gauge called a count). */
    private static final Set<String> AGAINST_NAMING_RULES = Set.of("process.cpu.time", "system.cpu.count");

    private final JvmGcMetrics collections = new JvmGcMetrics();

    private ProcessMeters() {}

    /** Adds the meters to a registry; closing stops the listeners, not the registry. */
    public static ProcessMeters bind(MeterRegistry registry) {
        registry.config().meterFilter(MeterFilter.deny(id -> AGAINST_NAMING_RULES.contains(id.getName())));
        ProcessMeters meters = new ProcessMeters();
        meters.collections.bindTo(registry);
        new JvmMemoryMetrics().bindTo(registry);
        new JvmThreadMetrics().bindTo(registry);
        new ProcessorMetrics().bindTo(registry);
        new FileDescriptorMetrics().bindTo(registry);
        new UptimeMetrics().bindTo(registry);
        return meters;
    }

    @Override
    public void close() {
        collections.close();
    }
}
