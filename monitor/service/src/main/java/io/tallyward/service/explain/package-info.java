/**
 * A decision in plain words, for whoever asked the question: what was found and why, how sure that is, what it does not say,
 * and what to do. Made from nothing but the records of the experiment.
 */
package io.tallyward.service.explain;
