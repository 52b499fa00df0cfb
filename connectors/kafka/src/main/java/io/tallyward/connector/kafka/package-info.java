/**
 * Where shards live when events come from Kafka. A {@link io.tallyward.connector.kafka.HostedShard} is a single-threaded
 * state machine that knows nothing of threads, groups or transactions; a {@link io.tallyward.connector.kafka.ShardRunner}
 * hosts one such shard for every partition number that its consumer group is given, and makes each step durable.
 *
 * <p>The contract is short. Once per commit interval, what a shard wants to remember (its changed state), what it wants to
 * say (records for other topics) and how far it has read become durable together, in one Kafka transaction, or not at all.
 * If a transaction fails, or if the group hands the partition to somebody else, memory is thrown away and rebuilt from what
 * was committed; nothing half-committed is ever carried on. Starting, restarting, moving and recovering are therefore the
 * same act: read the committed offsets, then the shard's own compacted state, then continue.
 *
 * <p>A missing broker, a missing topic or a refused permission is a condition, not an end: it is said once in one sentence,
 * it shows in {@link io.tallyward.connector.kafka.RunnerStatus}, it is tried again with growing pauses, and it heals by
 * itself. Only an exception thrown by a shard itself ends a worker, because a broken invariant must not keep counting.
 *
 * <p>Only the public interface of the Kafka client library is used.
 */
package io.tallyward.connector.kafka;
