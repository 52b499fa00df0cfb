/**
 * What every shard has in common. A shard is a pure, single-threaded state machine: inputs go in one by one, effects come
 * out when asked for, and a restart is nothing but the replay of earlier state changes through one method. Who hosts a
 * shard (a consumer group, a file replay, a test) makes no difference to it.
 */
package io.tallyward.engine.shard;
