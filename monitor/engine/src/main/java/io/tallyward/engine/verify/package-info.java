/**
 * Whether a log of decisions proves itself. A {@link io.tallyward.engine.verify.RecordVerifier} takes records one by one,
 * checks the chain, and decides everything once more from the counts in the records, with the classes that decided first.
 * What it cannot compute again are the few figures that come from windows between records; they are bounded by their
 * neighbours and sealed by the chain, and {@link io.tallyward.engine.decide.Recomputation} names them.
 */
package io.tallyward.engine.verify;
