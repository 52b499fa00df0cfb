package io.tallyward.service.metrics;

import io.tallyward.service.metrics.MetricFamily.Sample;
import java.util.ArrayList;
import java.util.EnumMap;
import java.util.List;
import java.util.Map;

/** The values of one scrape while they are written down. A value that is missing or not finite leaves no series. */
final class Sheet {

    private final Map<Metric, List<Sample>> samples = new EnumMap<>(Metric.class);

    void put(Metric metric, double value, String... labelValues) {
        if (labelValues.length != metric.labels().size()) {
            throw new IllegalArgumentException(metric.published() + ": " + labelValues.length
                    + " label values (expected: " + metric.labels() + ")");
        }
        if (Double.isFinite(value)) {
            samples.computeIfAbsent(metric, unused -> new ArrayList<>()).add(new Sample(List.of(labelValues), value));
        }
    }

    void putPresent(Metric metric, Double valueOrNull, String... labelValues) {
        if (valueOrNull != null) {
            put(metric, valueOrNull.doubleValue(), labelValues);
        }
    }

    void putState(Metric metric, boolean holds, String... labelValues) {
        put(metric, holds ? 1.0 : 0.0, labelValues);
    }

    /** The families that have series, in the order of {@link Metric#values()}. */
    List<MetricFamily> families() {
        List<MetricFamily> families = new ArrayList<>();
        samples.forEach((metric, list) -> families.add(new MetricFamily(metric, list)));
        return families;
    }
}
