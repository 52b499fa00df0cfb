/**
 * How long the things take that are done often. Every benchmark is one operation with everything it needs prepared, so
 * that its time can be read as the time of a look, a plan, a report or an event. Nothing here runs in a test: times are to be read,
 * not asserted.
 */
package io.tallyward.benchmark;
