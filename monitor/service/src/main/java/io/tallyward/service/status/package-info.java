/**
 * What is known right now, for everybody who asks. The hosts of the shards publish immutable snapshots to a
 * {@link io.tallyward.service.status.StatusBoard}; metrics, pages and the API read them from there and from nowhere else,
 * so that they never wait for a shard and never disagree with each other. Whether the parts of the process work is a
 * different question; {@link io.tallyward.service.status.HealthBoard} answers it.
 */
package io.tallyward.service.status;
