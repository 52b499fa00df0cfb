package io.tallyward.service.config;

import java.nio.file.Path;
import java.time.Duration;
import java.util.Objects;
import java.util.Optional;

/**
 * The configuration of one instance of the service. Its text is safe to log: secrets and client properties do not print.
 *
 * @param file the file it was read from
 * @param name prefix of consumer groups and internal topics
 * @param kafka how to reach the brokers
 * @param input what to read and how to understand it
 * @param plans directory of the plan files, absolute
 * @param commitInterval how long effects are gathered before they are committed together
 * @param workers how many threads host shards, 1 to 64
 * @param http where metrics, health, page and API are served
 * @param webhook whom to tell; empty when nobody is told
 * @param unitKey key of the hash that stands for a unit; empty for the built-in one, which hides nothing from those who
 *     can guess identifiers
 */
public record ServiceConfig(
        Path file,
        String name,
        KafkaConfig kafka,
        InputConfig input,
        Path plans,
        Duration commitInterval,
        int workers,
        HttpConfig http,
        Optional<WebhookConfig> webhook,
        Optional<Secret> unitKey) {

    public ServiceConfig {
        Objects.requireNonNull(file, "file");
        Objects.requireNonNull(name, "name");
        Objects.requireNonNull(kafka, "kafka");
        Objects.requireNonNull(input, "input");
        Objects.requireNonNull(plans, "plans");
        Objects.requireNonNull(commitInterval, "commitInterval");
        Objects.requireNonNull(http, "http");
        Objects.requireNonNull(webhook, "webhook");
        Objects.requireNonNull(unitKey, "unitKey");
    }
}
