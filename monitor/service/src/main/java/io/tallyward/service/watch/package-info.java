/**
 * The running service: shards hosted on Kafka, notices on their way out, and the HTTP server, built by hand, started in
 * order and stopped in reverse. What is counted and decided is the engine's business; here it is only put in its place.
 */
package io.tallyward.service.watch;
