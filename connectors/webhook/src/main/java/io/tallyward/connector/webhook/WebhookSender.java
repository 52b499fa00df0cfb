package io.tallyward.connector.webhook;

import io.tallyward.engine.record.Notice;
import java.io.IOException;
import java.net.ConnectException;
import java.net.InetAddress;
import java.net.ProxySelector;
import java.net.UnknownHostException;
import java.net.http.HttpClient;
import java.net.http.HttpConnectTimeoutException;
import java.net.http.HttpRequest;
import java.net.http.HttpResponse;
import java.net.http.HttpTimeoutException;
import java.time.Duration;
import java.time.Instant;
import java.util.Optional;
import java.util.Set;
import java.util.concurrent.CompletableFuture;
import java.util.concurrent.ExecutionException;
import java.util.concurrent.ExecutorService;
import java.util.concurrent.Executors;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.TimeoutException;
import javax.net.ssl.SSLException;

/**
 * Sends one signed notice to one target: a POST that follows no redirect, uses no proxy and takes at most the target's
 * request timeout, whatever the receiver does. The status of the answer decides; its body is read off within a bound and
 * thrown away.
 *
 * <p>The host is resolved and judged by {@link AddressRule} before each attempt. The client resolves it again when it
 * connects; the Java runtime caches lookups (30 seconds unless configured otherwise), so both see the same answer. Where
 * that cache is switched off, network policy is the guard that remains.
 */
public final class WebhookSender implements NoticeTransport, AutoCloseable {

    private static final int GONE = 410;
    private static final Set<Integer> MAY_ASK_TO_WAIT = Set.of(429, 502, 503, 504);

    private final WebhookTarget target;
    private final WebhookSigner signer;
    private final ExecutorService executor;
    private final HttpClient client;

    /** Prepares to send; nothing is connected yet. */
    public WebhookSender(WebhookTarget target) {
        this.target = target;
        this.signer = new WebhookSigner(target.secrets());
        this.executor = Executors.newCachedThreadPool(task -> {
            Thread thread = new Thread(task, "tallyward-webhook-http");
            thread.setDaemon(true);
            return thread;
        });
        this.client = HttpClient.newBuilder()
                .version(HttpClient.Version.HTTP_1_1)
                .followRedirects(HttpClient.Redirect.NEVER)
                .proxy(ProxySelector.of(null))
                .connectTimeout(target.connectTimeout())
                .executor(executor)
                .build();
    }

    @Override
    public AttemptResult attempt(Notice notice, Instant now) throws InterruptedException {
        Optional<String> refusal = addressRefusal();
        if (refusal.isPresent()) {
            return AttemptResult.unanswered(refusal.get());
        }
        StatusHandler handler = new StatusHandler();
        CompletableFuture<HttpResponse<Void>> answer = client.sendAsync(request(notice, now), handler);
        String trouble = "";
        try {
            answer.get(target.requestTimeout().toMillis(), TimeUnit.MILLISECONDS);
        } catch (TimeoutException e) {
            trouble = target.origin() + silence();
        } catch (ExecutionException e) {
            trouble = target.origin() + (isSilence(e.getCause()) ? silence() : " " + cause(e.getCause()));
        } finally {
            answer.cancel(true);
        }
        // An answer whose body stalls or breaks is still an answer.
        return handler.head().map(head -> judge(head, now)).orElse(AttemptResult.unanswered(trouble));
    }

    /** Stops the threads. An attempt that is under way fails. */
    @Override
    public void close() {
        executor.shutdownNow();
    }

    private String silence() {
        return " did not answer within " + target.requestTimeout();
    }

    /** The client has a timer of its own for the same time, and either may be the first. */
    private static boolean isSilence(Throwable failure) {
        return failure instanceof HttpTimeoutException && !(failure instanceof HttpConnectTimeoutException);
    }

    private HttpRequest request(Notice notice, Instant now) {
        byte[] body = NoticeBody.render(notice, target);
        long seconds = now.getEpochSecond();
        return HttpRequest.newBuilder(target.uri())
                .timeout(target.requestTimeout())
                .header("content-type", NoticeBody.CONTENT_TYPE)
                .header("user-agent", "tallyward")
                .header(WebhookSigner.ID_HEADER, notice.id())
                .header(WebhookSigner.TIMESTAMP_HEADER, Long.toString(seconds))
                .header(WebhookSigner.SIGNATURE_HEADER, signer.signature(notice.id(), seconds, body))
                .POST(HttpRequest.BodyPublishers.ofByteArray(body))
                .build();
    }

    private Optional<String> addressRefusal() {
        if (target.allowPrivate()) {
            return Optional.empty();
        }
        try {
            for (InetAddress address : InetAddress.getAllByName(target.uri().getHost())) {
                Optional<String> what = AddressRule.refusal(address);
                if (what.isPresent()) {
                    return Optional.of(target.origin() + " is at " + address.getHostAddress() + ", which is "
                            + what.get() + " (expected: a public address, or allow-private: true)");
                }
            }
            return Optional.empty();
        } catch (UnknownHostException e) {
            return Optional.of(target.origin() + " has no address: the name does not resolve");
        }
    }

    private static AttemptResult judge(HttpResponse.ResponseInfo head, Instant now) {
        int status = head.statusCode();
        if (status >= 200 && status < 300) {
            return AttemptResult.delivered(status);
        }
        if (status == GONE) {
            return AttemptResult.gone(status);
        }
        Optional<Duration> retryAfter = MAY_ASK_TO_WAIT.contains(status)
                ? head.headers().firstValue("retry-after").flatMap(value -> RetryAfter.parse(value, now))
                : Optional.empty();
        return AttemptResult.refused(status, retryAfter);
    }

    private static String cause(Throwable failure) {
        if (failure instanceof HttpConnectTimeoutException) {
            return "could not be connected in time";
        }
        if (failure instanceof ConnectException) {
            return "could not be connected";
        }
        if (failure instanceof SSLException) {
            return "failed the TLS handshake or its certificate is not trusted";
        }
        String type = failure.getClass().getSimpleName();
        return (failure instanceof IOException ? "broke the connection: " : "could not be called: ") + type;
    }
}
