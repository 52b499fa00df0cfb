package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertDoesNotThrow;
import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.standardwebhooks.Webhook;
import com.sun.net.httpserver.HttpExchange;
import com.sun.net.httpserver.HttpServer;
import io.tallyward.connector.webhook.AttemptResult.Outcome;
import io.tallyward.connector.webhook.Fixtures.ManualClock;
import java.io.IOException;
import java.net.InetAddress;
import java.net.InetSocketAddress;
import java.net.ServerSocket;
import java.net.URI;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayDeque;
import java.util.ArrayList;
import java.util.Deque;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalInt;
import java.util.TreeMap;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.ExecutorService;
import java.util.concurrent.Executors;
import org.junit.jupiter.api.AfterEach;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.Timeout;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

/** Against a receiver on the loopback interface. */
@Timeout(60)
class WebhookSenderIT {

    private record Received(String method, Map<String, List<String>> headers, String body) {

        String header(String name) {
            return headers.get(name).get(0);
        }
    }

    private final List<Received> received = new ArrayList<>();
    private final Deque<Handler> handlers = new ArrayDeque<>();
    private final CountDownLatch over = new CountDownLatch(1);
    private final ExecutorService threads = Executors.newCachedThreadPool();
    private HttpServer server;
    private WebhookSender sender;

    private interface Handler {
        void handle(HttpExchange exchange) throws IOException, InterruptedException;
    }

    @BeforeEach
    void listen() throws IOException {
        server = HttpServer.create(new InetSocketAddress(InetAddress.getLoopbackAddress(), 0), 0);
        server.setExecutor(threads);
        server.createContext("/", this::receive);
        server.start();
        sender = new WebhookSender(target(true, Duration.ofSeconds(15)));
    }

    @AfterEach
    void hangUp() {
        over.countDown();
        sender.close();
        server.stop(0);
        threads.shutdownNow();
    }

    @Test
    void sendsASignedCloudEventThatTheReferenceLibraryVerifies() throws InterruptedException {
        AttemptResult result = sender.attempt(Fixtures.stop("n_1"), Instant.now());
        assertEquals(AttemptResult.delivered(200), result);
        Received post = received.get(0);
        assertEquals("POST", post.method());
        assertEquals("application/cloudevents+json", post.header("content-type"));
        assertEquals("n_1", post.header("webhook-id"));
        assertEquals(
                new String(
                        NoticeBody.render(Fixtures.stop("n_1"), target(true, Duration.ofSeconds(15))),
                        StandardCharsets.UTF_8),
                post.body());
        assertDoesNotThrow(() -> new Webhook(Fixtures.SECRET).verify(post.body(), post.headers()));
    }

    @Test
    void keepsIdAndBodyOverRetriesAndRenewsTimestampAndSignature() throws Exception {
        handlers.add(answer(503, Map.of("Retry-After", "60")));
        handlers.add(answer(500, Map.of()));
        ManualClock clock = new ManualClock(Fixtures.START);
        List<String> settled = new ArrayList<>();
        RetrySchedule schedule = new RetrySchedule(RetrySchedule.standard(0).delays(), 0, 0);
        try (DeliveryQueue queue = new DeliveryQueue(sender, schedule, 10, clock, DeliveryListener.NONE)) {
            queue.submit(Fixtures.stop("n_1"), () -> settled.add("n_1"));
            assertEquals(1, queue.runDue());
            clock.advance(Duration.ofSeconds(59));
            assertEquals(0, queue.runDue());
            clock.advance(Duration.ofSeconds(1));
            assertEquals(1, queue.runDue());
            clock.advance(Duration.ofMinutes(5));
            assertEquals(1, queue.runDue());
            assertEquals(List.of("n_1"), settled);
            assertEquals(2, queue.status().failedAttempts());
        }
        long[] offsets = {0, 60, 360};
        for (int i = 0; i < offsets.length; i++) {
            Received post = received.get(i);
            long seconds = Fixtures.START.getEpochSecond() + offsets[i];
            assertEquals("n_1", post.header("webhook-id"));
            assertEquals(received.get(0).body(), post.body());
            assertEquals(Long.toString(seconds), post.header("webhook-timestamp"));
            assertEquals(
                    new Webhook(Fixtures.SECRET).sign("n_1", seconds, post.body()), post.header("webhook-signature"));
        }
    }

    @ParameterizedTest
    @ValueSource(ints = {301, 302, 303, 307, 308})
    void followsNoRedirect(int status) throws InterruptedException {
        handlers.add(answer(status, Map.of("Location", "http://127.0.0.1:" + port() + "/elsewhere")));
        AttemptResult result = sender.attempt(Fixtures.stop("n_1"), Instant.now());
        assertEquals(Outcome.FAILED, result.outcome());
        assertEquals(OptionalInt.of(status), result.status());
        assertEquals("the receiver answered " + status + ", a redirect, which is never followed", result.detail());
        assertEquals(1, received.size());
    }

    @Test
    void takesGoneForAWishToHearNothingMore() throws InterruptedException {
        handlers.add(answer(410, Map.of()));
        assertEquals(
                Outcome.GONE,
                sender.attempt(Fixtures.stop("n_1"), Instant.now()).outcome());
    }

    @ParameterizedTest
    @ValueSource(ints = {400, 401, 404, 409, 422, 500, 501})
    void retriesEveryOtherAnswerOnTheOrdinarySchedule(int status) throws InterruptedException {
        handlers.add(answer(status, Map.of("Retry-After", "60")));
        AttemptResult result = sender.attempt(Fixtures.stop("n_1"), Instant.now());
        assertEquals(
                new AttemptResult(
                        Outcome.FAILED, OptionalInt.of(status), "the receiver answered " + status, Optional.empty()),
                result);
    }

    @ParameterizedTest
    @ValueSource(ints = {429, 502, 503, 504})
    void honoursRetryAfterWhereItMeansSomething(int status) throws InterruptedException {
        handlers.add(answer(status, Map.of("Retry-After", "604800")));
        AttemptResult result = sender.attempt(Fixtures.stop("n_1"), Instant.now());
        assertEquals(Optional.of(Duration.ofHours(24)), result.retryAfter());
    }

    @Test
    void readsNoMoreThanItsBoundOfAnEndlessAnswer() throws InterruptedException {
        CountDownLatch cut = new CountDownLatch(1);
        handlers.add(exchange -> {
            exchange.sendResponseHeaders(200, 0);
            try {
                while (over.getCount() > 0) {
                    exchange.getResponseBody().write(new byte[65_536]);
                }
            } catch (IOException e) {
                cut.countDown();
            }
        });
        assertEquals(AttemptResult.delivered(200), sender.attempt(Fixtures.stop("n_1"), Instant.now()));
        cut.await();
    }

    @Test
    void takesTheStatusOfAnAnswerWhoseBodyStalls() throws InterruptedException {
        WebhookSender hasty = new WebhookSender(target(true, Duration.ofMillis(700)));
        handlers.add(exchange -> {
            exchange.sendResponseHeaders(202, 1000);
            exchange.getResponseBody().write('x');
            exchange.getResponseBody().flush();
            over.await();
        });
        assertEquals(AttemptResult.delivered(202), hasty.attempt(Fixtures.stop("n_1"), Instant.now()));
        hasty.close();
    }

    @Test
    void givesUpOnAReceiverThatDoesNotAnswer() throws InterruptedException {
        WebhookSender hasty = new WebhookSender(target(true, Duration.ofMillis(700)));
        handlers.add(exchange -> over.await());
        AttemptResult result = hasty.attempt(Fixtures.stop("n_1"), Instant.now());
        assertEquals(Outcome.FAILED, result.outcome());
        assertTrue(result.detail().startsWith("http://127.0.0.1:" + port() + " did not answer"), result.detail());
        hasty.close();
    }

    @Test
    void reportsAReceiverThatIsNotThere() throws Exception {
        int closed;
        try (ServerSocket socket = new ServerSocket(0, 1, InetAddress.getLoopbackAddress())) {
            closed = socket.getLocalPort();
        }
        WebhookTarget nowhere = WebhookTarget.builder(
                        URI.create("http://127.0.0.1:" + closed + "/t0ken"), List.of(Fixtures.secret()))
                .allowHttp(true)
                .allowPrivate(true)
                .build();
        try (WebhookSender lost = new WebhookSender(nowhere)) {
            AttemptResult result = lost.attempt(Fixtures.stop("n_1"), Instant.now());
            assertEquals("http://127.0.0.1:" + closed + " could not be connected", result.detail());
        }
    }

    @Test
    void connectsToNoPrivateAddressUnlessAllowed() throws InterruptedException {
        try (WebhookSender strict = new WebhookSender(target(false, Duration.ofSeconds(15)))) {
            AttemptResult result = strict.attempt(Fixtures.stop("n_1"), Instant.now());
            assertEquals(Outcome.FAILED, result.outcome());
            assertTrue(
                    result.detail()
                            .endsWith("is at 127.0.0.1, which is loopback (expected: a public address, or"
                                    + " allow-private: true)"),
                    result.detail());
        }
        assertFalse(received.iterator().hasNext());
    }

    private WebhookTarget target(boolean allowPrivate, Duration requestTimeout) {
        return WebhookTarget.builder(
                        URI.create("http://127.0.0.1:" + port() + "/notices?k=t0ken"), List.of(Fixtures.secret()))
                .allowHttp(true)
                .allowPrivate(allowPrivate)
                .timeouts(Duration.ofSeconds(5), requestTimeout)
                .build();
    }

    private int port() {
        return server.getAddress().getPort();
    }

    private static Handler answer(int status, Map<String, String> headers) {
        return exchange -> {
            headers.forEach(exchange.getResponseHeaders()::set);
            byte[] body = "an answer that nobody reads".getBytes(StandardCharsets.UTF_8);
            exchange.sendResponseHeaders(status, body.length);
            exchange.getResponseBody().write(body);
        };
    }

    private void receive(HttpExchange exchange) throws IOException {
        try (exchange) {
            String body = new String(exchange.getRequestBody().readAllBytes(), StandardCharsets.UTF_8);
            Map<String, List<String>> headers = new TreeMap<>(String.CASE_INSENSITIVE_ORDER);
            headers.putAll(exchange.getRequestHeaders());
            Handler handler;
            synchronized (received) {
                received.add(new Received(exchange.getRequestMethod(), headers, body));
                handler = handlers.isEmpty() ? answer(200, Map.of()) : handlers.poll();
            }
            handler.handle(exchange);
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
        }
    }
}
