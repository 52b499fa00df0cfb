package io.tallyward.service.http;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.HealthBoard;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import io.tallyward.service.status.Northwater;
import io.tallyward.service.status.StatusBoard;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.net.InetAddress;
import java.net.Socket;
import java.net.URI;
import java.net.http.HttpClient;
import java.net.http.HttpRequest;
import java.net.http.HttpRequest.BodyPublishers;
import java.net.http.HttpResponse;
import java.net.http.HttpResponse.BodyHandlers;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.util.List;
import java.util.Map;
import java.util.OptionalLong;
import org.junit.jupiter.api.AfterEach;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

class StatusServerIT {

    private static final Duration PATIENCE = Duration.ofSeconds(20);

    private final HttpClient client =
            HttpClient.newBuilder().connectTimeout(PATIENCE).build();
    private final StatusBoard board = new StatusBoard();
    private final HealthBoard health = new HealthBoard();
    private volatile Health kafka = new Health("kafka", State.OK, "Connected.");
    private StatusServer server;

    @BeforeEach
    void start() {
        health.add(() -> kafka);
        board.publishExperiments(0, Northwater.all());
        server = StatusServer.start("127.0.0.1", 0, NorthwaterSite.site(board, health));
    }

    @AfterEach
    void stop() {
        server.close();
    }

    @ParameterizedTest
    @ValueSource(
            strings = {
                "",
                "metrics",
                "health/live",
                "health/ready",
                "api/experiments",
                "api/experiments/deck-map",
                "api/partitions",
                "experiments/deck-map",
                "assets/page.css",
                "assets/live.js",
                "assets/mark.svg"
            })
    void answersGetAndHeadAlikeAndNothingElse(String path) {
        HttpResponse<String> get = send("GET", path);
        assertEquals(200, get.statusCode());
        assertFalse(get.body().isEmpty());
        HttpResponse<String> head = send("HEAD", path);
        assertEquals(200, head.statusCode());
        assertEquals("", head.body());
        assertEquals(header(get, "content-type"), header(head, "content-type"));
        for (String method : List.of("POST", "PUT", "DELETE", "PATCH", "OPTIONS", "BREW")) {
            HttpResponse<String> refused = send(method, path);
            assertEquals(405, refused.statusCode(), method);
            assertEquals("GET, HEAD", header(refused, "allow"));
            assertSafe(refused);
        }
        assertSafe(get);
    }

    @Test
    void tellsPrometheusInItsTextFormat() {
        HttpResponse<String> answer = send("GET", "metrics");
        assertEquals("text/plain; version=0.0.4; charset=utf-8", header(answer, "content-type"));
        assertTrue(answer.body().contains("tallyward_verdict{experiment=\"quay-banner\",state=\"stop-benefit\",} 1.0"));
    }

    @Test
    void becomesReadyWhenEveryPartWorksAndStaysAliveMeanwhile() throws IOException {
        kafka = new Health("kafka", State.STARTING, "State is restored, 40 of 90 MB so far.");
        assertHealth("health/live", 200, "ok", "starting");
        assertHealth("health/ready", 503, "unavailable", "starting");
        assertEquals(503, send("HEAD", "health/ready").statusCode());
        kafka = new Health("kafka", State.OK, "Connected.");
        assertHealth("health/ready", 200, "ok", "ok");
        kafka = new Health(
                "kafka", State.DOWN, "No broker answers at 127.0.0.1:9092. Start it or correct the address.");
        assertHealth("health/ready", 503, "unavailable", "down");
        assertHealth("health/live", 200, "ok", "down");
        kafka = new Health("kafka", State.BROKEN, "Two shards own partition 3. Restart this process.");
        assertHealth("health/live", 503, "unavailable", "broken");
    }

    @Test
    void saysInJsonThatAnExperimentIsNotHere() throws IOException {
        HttpResponse<String> answer = send("GET", "api/experiments/harbour-song");
        assertEquals(404, answer.statusCode());
        assertEquals("application/json", header(answer, "content-type"));
        assertTrue(json(answer).get("message").textValue().startsWith("This instance decides about no experiment"));
        assertEquals(404, send("GET", "api/harbour").statusCode());
    }

    @ParameterizedTest
    @ValueSource(strings = {"experiments/harbour-song", "harbour", "experiments/%3Cscript%3E", "assets/../page.css"})
    void saysOnAPageThatThereIsNothing(String path) {
        HttpResponse<String> answer = send("GET", path);
        assertEquals(404, answer.statusCode());
        assertTrue(answer.body().contains("There is no such page"));
        assertFalse(answer.body().contains("<script>"));
        assertSafe(answer);
    }

    @Test
    void followsTheBoard() {
        board.publishExperiments(0, Map.of());
        assertEquals("[]", send("GET", "api/experiments").body());
        assertEquals(404, send("GET", "experiments/deck-map").statusCode());
        assertTrue(send("GET", "").body().contains("This instance decides about no experiment."));
    }

    @Test
    void warnsOnEveryPageOfATopicThatIsNotKeyedByUnit() {
        board.publishCounts(2, new CountReport(Map.of(), OptionalLong.empty(), Map.of(), 0, true));
        for (String path : List.of("", "experiments/deck-map")) {
            assertTrue(send("GET", path).body().contains("The input topic is not keyed by unit: "), path);
        }
        board.withdrawCount(2);
        assertFalse(send("GET", "").body().contains("not keyed by unit"));
    }

    @Test
    void refusesOversizedRequests() throws IOException {
        assertEquals(405, send("POST", "metrics", "x".repeat(5_000)).statusCode());
        try (Socket socket = new Socket(InetAddress.getByName("127.0.0.1"), server.port())) {
            socket.setSoTimeout((int) PATIENCE.toMillis());
            String request = "GET / HTTP/1.1\r\nHost: x\r\nX-Long: " + "x".repeat(20_000) + "\r\n\r\n";
            socket.getOutputStream().write(request.getBytes(StandardCharsets.US_ASCII));
            String answer = new String(socket.getInputStream().readNBytes(12), StandardCharsets.US_ASCII);
            assertEquals("HTTP/1.1 431", answer);
        }
    }

    @Test
    void saysWhatToDoWhenThePortIsTaken() {
        UncheckedIOException failure = assertThrows(
                UncheckedIOException.class,
                () -> StatusServer.start("127.0.0.1", server.port(), NorthwaterSite.site(board, health)));
        assertTrue(failure.getMessage().startsWith("http: 127.0.0.1:" + server.port() + " is in use"));
        assertTrue(failure.getMessage().contains("http.port"), failure.getMessage());
        assertEquals(200, send("GET", "metrics").statusCode(), "the first server goes on");
    }

    @Test
    void listensNoLongerWhenClosed() {
        server.close();
        assertThrows(UncheckedIOException.class, () -> send("GET", "health/live"));
    }

    private void assertHealth(String path, int status, String summary, String state) throws IOException {
        HttpResponse<String> answer = send("GET", path);
        assertEquals(status, answer.statusCode(), path);
        assertEquals(summary, json(answer).get("status").textValue());
        JsonNode check = json(answer).get("checks").get(0);
        assertEquals("kafka", check.get("name").textValue());
        assertEquals(state, check.get("state").textValue());
        assertEquals(kafka.detail(), check.get("detail").textValue());
    }

    private static void assertSafe(HttpResponse<String> answer) {
        assertTrue(header(answer, "content-security-policy").startsWith("default-src 'self'"));
        assertEquals("nosniff", header(answer, "x-content-type-options"));
        assertEquals("no-referrer", header(answer, "referrer-policy"));
        assertEquals("no-store", header(answer, "cache-control"));
        assertTrue(answer.headers().firstValue("server").isEmpty(), "no version is told");
        assertTrue(answer.headers().firstValue("x-powered-by").isEmpty(), "no version is told");
    }

    private static String header(HttpResponse<String> answer, String name) {
        return answer.headers().firstValue(name).orElse("");
    }

    private static JsonNode json(HttpResponse<String> answer) throws IOException {
        return new ObjectMapper().readTree(answer.body());
    }

    private HttpResponse<String> send(String method, String path) {
        return send(method, path, "");
    }

    private HttpResponse<String> send(String method, String path, String body) {
        HttpRequest request = HttpRequest.newBuilder(URI.create(server.address() + path))
                .timeout(PATIENCE)
                .method(method, body.isEmpty() ? BodyPublishers.noBody() : BodyPublishers.ofString(body))
                .build();
        try {
            return client.send(request, BodyHandlers.ofString());
        } catch (IOException e) {
            throw new UncheckedIOException(e);
        } catch (InterruptedException e) {
            Thread.currentThread().interrupt();
            throw new IllegalStateException("interrupted", e);
        }
    }
}
