package io.tallyward.connector.webhook;

import java.net.http.HttpResponse;
import java.nio.ByteBuffer;
import java.util.List;
import java.util.Optional;
import java.util.concurrent.CompletableFuture;
import java.util.concurrent.CompletionStage;
import java.util.concurrent.Flow;

/** Keeps the head of an answer and throws its body away, reading at most 64 kB of it. For one answer only. */
final class StatusHandler implements HttpResponse.BodyHandler<Void> {

    private static final long LIMIT_BYTES = 65_536;

    private volatile HttpResponse.ResponseInfo head;

    @Override
    public HttpResponse.BodySubscriber<Void> apply(HttpResponse.ResponseInfo info) {
        head = info;
        return new Discard();
    }

    /** Status and headers; empty as long as none have arrived. */
    Optional<HttpResponse.ResponseInfo> head() {
        return Optional.ofNullable(head);
    }

    private static final class Discard implements HttpResponse.BodySubscriber<Void> {

        private final CompletableFuture<Void> done = new CompletableFuture<>();
        private Flow.Subscription subscription;
        private long bytes;

        @Override
        public CompletionStage<Void> getBody() {
            return done;
        }

        @Override
        public void onSubscribe(Flow.Subscription granted) {
            subscription = granted;
            granted.request(1);
        }

        @Override
        public void onNext(List<ByteBuffer> buffers) {
            bytes += buffers.stream().mapToLong(ByteBuffer::remaining).sum();
            if (bytes > LIMIT_BYTES) {
                subscription.cancel();
                done.complete(null);
            } else {
                subscription.request(1);
            }
        }

        @Override
        public void onError(Throwable failure) {
            done.completeExceptionally(failure);
        }

        @Override
        public void onComplete() {
            done.complete(null);
        }
    }
}
