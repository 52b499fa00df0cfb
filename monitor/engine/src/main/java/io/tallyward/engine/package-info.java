/**
 * What happens, as pure transitions: events become counts, counts become decisions. Nothing in here does I/O, reads a clock
 * or knows how it is hosted; the same inputs in the same order give the same effects, bit for bit.
 */
package io.tallyward.engine;
