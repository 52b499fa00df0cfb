/**
 * Truth against monitor. What the monitor counted is read from where it makes its counts durable, the topic of sealed
 * tallies, window by window and only what is committed; what it concluded is read from its public API, as anybody would.
 * Each comparison becomes a {@link io.tallyward.demo.check.Finding}; a table shows them, and the last line says whether all
 * of them hold.
 */
package io.tallyward.demo.check;
