package io.tallyward.service.metrics;

import java.util.List;

/**
 * All series of one metric at one moment.
 *
 * @param metric which metric
 * @param samples its series; never two with the same label values
 */
record MetricFamily(Metric metric, List<Sample> samples) {

    MetricFamily {
        samples = List.copyOf(samples);
    }

    /**
     * One series.
     *
     * @param labelValues in the order of {@link Metric#labels()}
     * @param value a finite number
     */
    record Sample(List<String> labelValues, double value) {}
}
