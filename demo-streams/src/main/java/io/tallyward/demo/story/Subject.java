package io.tallyward.demo.story;

/**
 * Who sees what: one unit under one variant of one experiment.
 *
 * @param experiment name of the experiment
 * @param variant name of the variant
 * @param unit identifier of the unit; the key of its records
 * @param device what the unit uses
 */
public record Subject(String experiment, String variant, String unit, Device device) {}
