/** Fixtures that the tests of several packages share: plans, events and the durable log of a shard. */
package io.tallyward.engine;
