package io.tallyward.engine.decide;

/**
 * Something in a record that cannot be, whatever is computed from it.
 *
 * @param field path to it, as in {@code split.peak.units}
 * @param found what the record says
 * @param expected what could be
 */
public record Objection(String field, String found, String expected) {}
