package io.tallyward.engine.verify;

/**
 * One place where a record is not what it should be.
 *
 * @param field path to it, named like the members of the published form, as in {@code comparisons[0].z}
 * @param recorded what the record says
 * @param expected what was computed, or what could be
 */
public record Difference(String field, String recorded, String expected) {}
