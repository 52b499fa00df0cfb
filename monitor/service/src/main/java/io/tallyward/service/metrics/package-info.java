/**
 * What the monitor tells Prometheus. {@link io.tallyward.service.metrics.MonitorMetrics} turns snapshots into
 * {@linkplain io.tallyward.service.metrics.MetricFamily families} of values when a scrape asks for them; a series exists
 * exactly as long as its value does. {@link io.tallyward.service.metrics.PrometheusExposition} is the one class that knows
 * the library which writes them.
 */
package io.tallyward.service.metrics;
