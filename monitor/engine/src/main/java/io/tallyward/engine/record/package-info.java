/**
 * What was decided, in a form that outlives the process: decision records, each carrying the counts it was made from and
 * the digest of the one before it, and the notices that people are told.
 */
package io.tallyward.engine.record;
