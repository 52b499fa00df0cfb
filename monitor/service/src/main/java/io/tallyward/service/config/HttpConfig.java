package io.tallyward.service.config;

/**
 * Where metrics, health, page and API are served.
 *
 * @param host address to listen on
 * @param port port to listen on; 0 lets the system choose a free one
 */
public record HttpConfig(String host, int port) {}
