/**
 * What counting costs, measured: the same events, read from a real broker in every way there is to compare. Each way is a
 * process of its own, whose CPU time is what is reported. Unlike the rest of the demo, which stays outside of the monitor,
 * this package runs the monitor's own parts: they are what it measures.
 */
package io.tallyward.demo.bench;
