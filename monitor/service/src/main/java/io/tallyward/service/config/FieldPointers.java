package io.tallyward.service.config;

/**
 * Where the fields of an event lie in a record: JSON Pointers (RFC 6901).
 *
 * @param kind what happened; see the kinds of the input
 * @param experiment name of the experiment
 * @param variant name of the variant
 * @param unit identifier of the randomised unit
 * @param id identifier of the event
 * @param at event time
 * @param source emitter of the event; records may lack it
 * @param view for a click, the id of the view; records may lack it
 * @param segments an object of low-cardinality fields; records may lack it
 */
public record FieldPointers(
        String kind,
        String experiment,
        String variant,
        String unit,
        String id,
        String at,
        String source,
        String view,
        String segments) {}
