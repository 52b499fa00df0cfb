package io.tallyward.service.metrics;

import io.micrometer.core.instrument.MeterRegistry;
import io.micrometer.prometheus.PrometheusConfig;
import io.micrometer.prometheus.PrometheusMeterRegistry;
import io.prometheus.client.Collector;
import io.prometheus.client.Collector.MetricFamilySamples;
import io.prometheus.client.exporter.common.TextFormat;
import java.util.ArrayList;
import java.util.List;

/**
 * Writes the monitor's own metrics, and those of Micrometer's binders, in the Prometheus text format 0.0.4. The only
 * class that knows the registry behind it: a successor replaces the body of this class and nothing else. Thread-safe.
 */
@SuppressWarnings("deprecation") // why this registry and not its successor: RATIONALE.md
public final class PrometheusExposition implements AutoCloseable {

    /** Media type of {@link #text()}. */
    public static final String CONTENT_TYPE = TextFormat.CONTENT_TYPE_004;

    private final PrometheusMeterRegistry registry = new PrometheusMeterRegistry(PrometheusConfig.DEFAULT);

    public PrometheusExposition(MonitorMetrics metrics) {
        registry.getPrometheusRegistry().register(new Collector() {
            @Override
            public List<MetricFamilySamples> collect() {
                return metrics.families().stream()
                        .map(PrometheusExposition::translate)
                        .toList();
            }
        });
    }

    /** Where Micrometer's binders register their meters. */
    public MeterRegistry meters() {
        return registry;
    }

    /** Everything there is to tell at this moment. */
    public String text() {
        return registry.scrape(CONTENT_TYPE);
    }

    @Override
    public void close() {
        registry.close();
    }

    private static MetricFamilySamples translate(MetricFamily family) {
        Metric metric = family.metric();
        List<MetricFamilySamples.Sample> samples =
                new ArrayList<>(family.samples().size());
        for (MetricFamily.Sample sample : family.samples()) {
            samples.add(new MetricFamilySamples.Sample(
                    metric.published(), metric.labels(), sample.labelValues(), sample.value()));
        }
        Collector.Type type = switch (metric.kind()) {
            case COUNTER -> Collector.Type.COUNTER;
            case GAUGE -> Collector.Type.GAUGE;
        };
        return new MetricFamilySamples(metric.published(), type, metric.help(), samples);
    }
}
