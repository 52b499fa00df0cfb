/**
 * The configuration of the running service: one YAML file, read once at the start into {@link
 * io.tallyward.service.config.ServiceConfig}. {@link io.tallyward.service.config.ConfigKeys} is the single place of every
 * key, its type, default and meaning. Secrets are never in the file: it names a file or an environment variable that holds
 * them, and a {@link io.tallyward.service.config.Secret} does not print.
 */
package io.tallyward.service.config;
