package io.tallyward.service.http;

import io.javalin.Javalin;
import io.javalin.compression.CompressionStrategy;
import io.javalin.config.JavalinConfig;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.net.BindException;
import org.eclipse.jetty.server.HttpConfiguration;
import org.eclipse.jetty.server.HttpConnectionFactory;
import org.eclipse.jetty.server.NetworkConnectionLimit;
import org.eclipse.jetty.server.Server;
import org.eclipse.jetty.server.ServerConnector;
import org.eclipse.jetty.util.thread.QueuedThreadPool;

/**
 * The HTTP server of the monitor. Owns a socket and a few threads from {@link #start} to {@link #close}.
 *
 * <p>Everything is bounded, because a monitor must outlive whoever reads it too eagerly: threads, connections (and with
 * them the requests that wait, one to a connection), and the size of a request, which never has a body worth reading.
 */
public final class StatusServer implements AutoCloseable {

    /** Enough for one scrape, a few probes and a few readers at once; the rest waits. */
    private static final int MAXIMUM_THREADS = 12;

    private static final int MAXIMUM_CONNECTIONS = 256;
    private static final int MAXIMUM_HEADER_BYTES = 8 * 1024;
    private static final int MAXIMUM_BODY_BYTES = 1024;

    /** A connection without traffic is closed after this time; longer than a usual scrape interval. */
    private static final int IDLE_MILLIS = 75_000;

    /** How long requests under way may take to end when the server is closed. */
    private static final int STOP_MILLIS = 2_000;

    /** How long a connection that is merely kept open holds up the end. */
    private static final int STOP_IDLE_MILLIS = 50;

    private final Javalin javalin;
    private final String host;
    private final int port;

    private StatusServer(Javalin javalin, String host) {
        this.javalin = javalin;
        this.host = host;
        this.port = javalin.port();
    }

    /**
     * Starts to listen.
     *
     * @param host address or name of the interface
     * @param port 0 to 65535; 0 takes any free port, which {@link #port()} then tells
     * @param site what is served
     * @throws UncheckedIOException when the address cannot be listened on; the message says what to do
     */
    public static StatusServer start(String host, int port, StatusSite site) {
        Javalin javalin = Javalin.create(config -> configure(config, host, port, site));
        try {
            javalin.start();
        } catch (RuntimeException e) {
            javalin.stop();
            throw new UncheckedIOException(explain(host, port, e), new IOException(e));
        }
        return new StatusServer(javalin, host);
    }

    /** The port that is listened on. */
    public int port() {
        return port;
    }

    /** Where the overview is found, as in {@code http://127.0.0.1:8087/}. */
    public String address() {
        String name = host.contains(":") ? "[" + host + "]" : host;
        return "http://" + name + ":" + port + "/";
    }

    @Override
    public void close() {
        javalin.stop();
    }

    private static void configure(JavalinConfig config, String host, int port, StatusSite site) {
        config.startup.showJavalinBanner = false;
        config.startup.showOldJavalinVersionWarning = false;
        config.startup.startupWatcherEnabled = false;
        config.http.maxRequestSize = MAXIMUM_BODY_BYTES;
        config.http.compressionStrategy = CompressionStrategy.NONE;
        QueuedThreadPool threads = new QueuedThreadPool(MAXIMUM_THREADS, 2, 30_000);
        threads.setName("http");
        threads.setDaemon(true);
        config.jetty.threadPool = threads;
        config.jetty.modifyHttpConfiguration(StatusServer::limit);
        config.jetty.addConnector((server, http) -> connector(server, http, host, port));
        config.jetty.modifyServer(server -> server.setStopTimeout(STOP_MILLIS));
        site.routes(config.routes);
    }

    private static void limit(HttpConfiguration http) {
        http.setSendServerVersion(false);
        http.setSendXPoweredBy(false);
        http.setSendDateHeader(true);
        http.setRequestHeaderSize(MAXIMUM_HEADER_BYTES);
    }

    private static ServerConnector connector(Server server, HttpConfiguration http, String host, int port) {
        limit(http);
        ServerConnector connector = new ServerConnector(server, 1, 1, new HttpConnectionFactory(http));
        connector.setHost(host);
        connector.setPort(port);
        connector.setIdleTimeout(IDLE_MILLIS);
        connector.setShutdownIdleTimeout(STOP_IDLE_MILLIS);
        connector.addBean(new NetworkConnectionLimit(MAXIMUM_CONNECTIONS, connector));
        return connector;
    }

    private static String explain(String host, int port, Throwable failure) {
        String where = "http: " + host + ":" + port;
        for (Throwable cause = failure; cause != null; cause = cause.getCause()) {
            if (cause instanceof BindException) {
                return where + " is in use or not ours (" + cause.getMessage()
                        + "). Stop the process that listens there, set http.port to a free port (0 takes any), or correct http.host.";
            }
        }
        return where + " cannot be listened on (" + failure.getMessage()
                + "). Set http.host to an address of this machine and http.port to a port this user may open.";
    }
}
