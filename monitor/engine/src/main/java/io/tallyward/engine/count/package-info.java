/**
 * From events to exact counts. A {@link io.tallyward.engine.count.CountShard} owns one input partition: it admits events,
 * keeps the ledger of units, attributes clicks to first exposures, and seals windows as the partition's own watermark
 * passes them. What it tells the deciding side is one {@link io.tallyward.engine.count.TallyUpdate} at a time: windows
 * that can no longer change.
 */
package io.tallyward.engine.count;
