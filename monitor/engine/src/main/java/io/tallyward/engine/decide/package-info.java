/**
 * From complete windows to decisions. A {@link io.tallyward.engine.decide.DecideShard} merges what the counting side
 * sealed, takes each window once every partition has sealed it, watches the split after each, and takes the looks that
 * the plan asks for. All of it follows from the windows in order: who counted them, in which batches and on how many
 * machines, cannot be seen in a decision.
 */
package io.tallyward.engine.decide;
