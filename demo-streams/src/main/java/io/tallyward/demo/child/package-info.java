/**
 * Processes that the demo starts and that must never outlive it. Each runs Java from the demo's own class path, writes
 * what it says to a file and keeps its standard input connected to the demo: when the demo ends, however it ends, the
 * input ends too, and the process stops by itself. Every wait has a limit.
 */
package io.tallyward.demo.child;
