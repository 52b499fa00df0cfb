package io.tallyward.demo.receiver;

import static org.junit.jupiter.api.Assertions.assertEquals;

import java.net.http.HttpClient;
import java.net.http.HttpRequest;
import java.net.http.HttpRequest.BodyPublishers;
import java.net.http.HttpResponse.BodyHandlers;
import java.nio.charset.StandardCharsets;
import java.time.Clock;
import java.time.Instant;
import java.time.ZoneOffset;
import java.util.Base64;
import java.util.List;
import java.util.concurrent.CopyOnWriteArrayList;
import javax.crypto.Mac;
import javax.crypto.spec.SecretKeySpec;
import org.junit.jupiter.api.AfterEach;
import org.junit.jupiter.api.BeforeEach;
import org.junit.jupiter.api.Test;

class WebhookReceiverIT {

    private static final Instant NOW = Instant.parse("2026-05-04T12:00:00Z");
    private static final String BODY = """
            {"specversion":"1.0","id":"n1","time":"2026-05-11T00:00:00Z","data":{"experiment":"quay-banner",\
            "variant":"wide","kind":"stop","severity":"page","summary":"wide does better","action":"decide"}}""";

    private final String secret = SignatureCheck.newSecret();
    private final List<ReceivedNotice> news = new CopyOnWriteArrayList<>();
    private final HttpClient client = HttpClient.newHttpClient();
    private WebhookReceiver receiver;

    @BeforeEach
    void start() throws Exception {
        receiver = WebhookReceiver.start(new SignatureCheck(secret), Clock.fixed(NOW, ZoneOffset.UTC), news::add);
    }

    @AfterEach
    void stop() {
        receiver.close();
    }

    @Test
    void takesASignedNoticeOnceHoweverOftenItComes() throws Exception {
        assertEquals(204, post("n1", BODY, sign("n1", BODY)));
        assertEquals(204, post("n1", BODY, sign("n1", BODY)));
        assertEquals(1, news.size());
        assertEquals(1, receiver.repeated());
        ReceivedNotice notice = receiver.notices().get(0);
        assertEquals("stop", notice.kind());
        assertEquals("quay-banner", notice.experiment());
        assertEquals("wide does better", notice.summary());
    }

    @Test
    void refusesAWrongSignatureAndSaysWhy() throws Exception {
        assertEquals(401, post("n1", BODY, sign("n2", BODY)));
        assertEquals(List.of("no signature fits"), receiver.refusals());
        assertEquals(List.of(), receiver.notices());
    }

    @Test
    void refusesASignedBodyThatIsNoNotice() throws Exception {
        assertEquals(400, post("n1", "{}", sign("n1", "{}")));
        assertEquals(1, receiver.refusals().size());
    }

    private int post(String id, String body, String signature) throws Exception {
        HttpRequest request = HttpRequest.newBuilder(receiver.address())
                .header("webhook-id", id)
                .header("webhook-timestamp", Long.toString(NOW.getEpochSecond()))
                .header("webhook-signature", signature)
                .POST(BodyPublishers.ofString(body))
                .build();
        return client.send(request, BodyHandlers.discarding()).statusCode();
    }

    private String sign(String id, String body) throws Exception {
        Mac mac = Mac.getInstance("HmacSHA256");
        byte[] key = Base64.getDecoder().decode(secret.substring("whsec_".length()));
        mac.init(new SecretKeySpec(key, "HmacSHA256"));
        String content = id + "." + NOW.getEpochSecond() + "." + body;
        return "v1," + Base64.getEncoder().encodeToString(mac.doFinal(content.getBytes(StandardCharsets.UTF_8)));
    }
}
