/**
 * A real broker without an installation. {@link io.tallyward.connector.embedded.EmbeddedBroker} runs one Kafka node, broker
 * and controller in one, inside this process and reachable from this machine only: for the demonstration, and for tests
 * where no container engine answers. It is the same server code that a cluster runs, so transactions, consumer groups and
 * compaction are the real ones; only replication is missing. It is not meant to hold data that matters.
 *
 * <p>The server classes are not a public interface of Kafka and may change with any release. They are touched in one class
 * of this package and nowhere else.
 */
package io.tallyward.connector.embedded;
