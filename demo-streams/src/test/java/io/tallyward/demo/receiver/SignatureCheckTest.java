package io.tallyward.demo.receiver;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.demo.receiver.SignatureCheck.Headers;
import java.nio.charset.StandardCharsets;
import java.time.Instant;
import org.junit.jupiter.api.Test;

/**
 * Oracle: the example that the Standard Webhooks libraries share (secret, id, timestamp, body and signature), as computed
 * with com.standardwebhooks:standardwebhooks 1.1.0.
 */
class SignatureCheckTest {

    private static final String ID = "msg_p5jXN8AQM9LWM0D4loKWxJek";
    private static final String SENT = "1614265330";
    private static final String SIGNATURE = "v1,g0hM9SsE+OTPJTGt/tmIKtSyZlE3uFJELVlNIOLJ1OE=";
    private static final byte[] BODY = "{\"test\": 2432232314}".getBytes(StandardCharsets.UTF_8);
    private static final Instant NOW = Instant.ofEpochSecond(Long.parseLong(SENT) + 10);

    private final SignatureCheck check = new SignatureCheck("whsec_MfKQ9r8GKYqrTwjUPD8ILPZIo2LaLaSw");

    @Test
    void acceptsTheSharedExample() {
        assertEquals("", check.fault(new Headers(ID, SENT, SIGNATURE), BODY, NOW));
    }

    @Test
    void acceptsAnyOfSeveralSignatures() {
        String several = "v1,AAAA v1a,whatever " + SIGNATURE;
        assertEquals("", check.fault(new Headers(ID, SENT, several), BODY, NOW));
    }

    @Test
    void refusesWhateverWasChanged() {
        byte[] other = "{\"test\": 2432232315}".getBytes(StandardCharsets.UTF_8);
        assertEquals("no signature fits", check.fault(new Headers(ID, SENT, SIGNATURE), other, NOW));
        assertEquals("no signature fits", check.fault(new Headers(ID + "x", SENT, SIGNATURE), BODY, NOW));
        assertEquals("no signature fits", check.fault(new Headers(ID, "1614265331", SIGNATURE), BODY, NOW));
        assertEquals("no signature fits", check.fault(new Headers(ID, SENT, "v1,notbase64!"), BODY, NOW));
        assertEquals("no signature fits", check.fault(new Headers(ID, SENT, SIGNATURE.substring(3)), BODY, NOW));
        SignatureCheck stranger = new SignatureCheck(SignatureCheck.newSecret());
        assertEquals("no signature fits", stranger.fault(new Headers(ID, SENT, SIGNATURE), BODY, NOW));
    }

    @Test
    void refusesWhatIsOldOrComesFromTheFuture() {
        Headers headers = new Headers(ID, SENT, SIGNATURE);
        Instant sent = Instant.ofEpochSecond(Long.parseLong(SENT));
        assertEquals("", check.fault(headers, BODY, sent.plus(SignatureCheck.TOLERANCE)));
        assertNotEquals(
                "",
                check.fault(headers, BODY, sent.plus(SignatureCheck.TOLERANCE).plusMillis(1)));
        assertNotEquals(
                "",
                check.fault(headers, BODY, sent.minus(SignatureCheck.TOLERANCE).minusMillis(1)));
    }

    @Test
    void refusesMissingAndUnreadableHeaders() {
        assertEquals("a webhook header is missing", check.fault(new Headers(null, SENT, SIGNATURE), BODY, NOW));
        assertEquals("a webhook header is missing", check.fault(new Headers(ID, null, SIGNATURE), BODY, NOW));
        assertEquals("a webhook header is missing", check.fault(new Headers(ID, SENT, null), BODY, NOW));
        assertEquals("the timestamp is no number", check.fault(new Headers(ID, "soon", SIGNATURE), BODY, NOW));
    }

    @Test
    void secretsAreNewEveryTimeAndLongEnough() {
        assertNotEquals(SignatureCheck.newSecret(), SignatureCheck.newSecret());
        assertTrue(SignatureCheck.newSecret().length() >= "whsec_".length() + 32);
    }
}
