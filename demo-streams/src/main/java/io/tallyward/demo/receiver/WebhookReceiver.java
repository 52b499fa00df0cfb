package io.tallyward.demo.receiver;

import com.sun.net.httpserver.HttpExchange;
import com.sun.net.httpserver.HttpServer;
import io.tallyward.demo.child.LoopbackPorts;
import io.tallyward.demo.receiver.SignatureCheck.Headers;
import java.io.IOException;
import java.io.InputStream;
import java.net.InetAddress;
import java.net.InetSocketAddress;
import java.net.URI;
import java.time.Clock;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.concurrent.ExecutorService;
import java.util.concurrent.Executors;
import java.util.function.Consumer;

/** A webhook receiver on the loopback address. Thread-safe. */
public final class WebhookReceiver implements AutoCloseable {

    private static final String PATH = "/notices";
    private static final int LARGEST_BODY = 20_000;
    private static final int NO_BODY = -1;

    private final HttpServer server;
    private final ExecutorService thread;
    private final SignatureCheck signatures;
    private final Clock clock;
    private final Consumer<ReceivedNotice> news;
    private final Map<String, ReceivedNotice> notices = new LinkedHashMap<>();
    private final List<String> refusals = new ArrayList<>();
    private int repeated;

    private WebhookReceiver(HttpServer server, SignatureCheck signatures, Clock clock, Consumer<ReceivedNotice> news) {
        this.server = server;
        this.signatures = signatures;
        this.clock = clock;
        this.news = news;
        thread = Executors.newSingleThreadExecutor(task -> {
            Thread daemon = new Thread(task, "webhook-receiver");
            daemon.setDaemon(true);
            return daemon;
        });
    }

    /**
     * Starts to listen on a free port.
     *
     * @param news is told every notice once, in the order of arrival
     */
    public static WebhookReceiver start(SignatureCheck signatures, Clock clock, Consumer<ReceivedNotice> news)
            throws IOException {
        HttpServer server = HttpServer.create(new InetSocketAddress(InetAddress.getByName(LoopbackPorts.HOST), 0), 0);
        WebhookReceiver receiver = new WebhookReceiver(server, signatures, clock, news);
        server.createContext(PATH, receiver::handle);
        server.setExecutor(receiver.thread);
        server.start();
        return receiver;
    }

    /** Where to post. */
    public URI address() {
        return URI.create(
                "http://" + LoopbackPorts.HOST + ":" + server.getAddress().getPort() + PATH);
    }

    /** Every notice received, once, in the order of arrival. */
    public synchronized List<ReceivedNotice> notices() {
        return List.copyOf(notices.values());
    }

    /** How many deliveries repeated an earlier one. */
    public synchronized int repeated() {
        return repeated;
    }

    /** Why messages were refused, one entry each. */
    public synchronized List<String> refusals() {
        return List.copyOf(refusals);
    }

    @Override
    public void close() {
        server.stop(0);
        thread.shutdownNow();
    }

    private void handle(HttpExchange exchange) throws IOException {
        try (exchange) {
            exchange.sendResponseHeaders(status(exchange), NO_BODY);
        }
    }

    private int status(HttpExchange exchange) throws IOException {
        if (!exchange.getRequestMethod().equals("POST")) {
            return 405;
        }
        byte[] body;
        try (InputStream in = exchange.getRequestBody()) {
            body = in.readNBytes(LARGEST_BODY + 1);
        }
        if (body.length > LARGEST_BODY) {
            return refuse("the body is larger than " + LARGEST_BODY + " bytes", 413);
        }
        Headers headers = new Headers(
                exchange.getRequestHeaders().getFirst("webhook-id"),
                exchange.getRequestHeaders().getFirst("webhook-timestamp"),
                exchange.getRequestHeaders().getFirst("webhook-signature"));
        String fault = signatures.fault(headers, body, clock.instant());
        if (!fault.isEmpty()) {
            return refuse(fault, 401);
        }
        try {
            accept(ReceivedNotice.read(headers.id(), body));
            return 204;
        } catch (IOException unreadable) {
            return refuse("the body cannot be read: " + unreadable.getMessage(), 400);
        }
    }

    private void accept(ReceivedNotice notice) {
        synchronized (this) {
            if (notices.putIfAbsent(notice.id(), notice) != null) {
                repeated++;
                return;
            }
        }
        news.accept(notice);
    }

    private synchronized int refuse(String reason, int status) {
        refusals.add(reason);
        return status;
    }
}
