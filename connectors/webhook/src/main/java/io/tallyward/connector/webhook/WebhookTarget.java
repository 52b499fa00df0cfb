package io.tallyward.connector.webhook;

import java.net.URI;
import java.time.Duration;
import java.util.List;
import java.util.Locale;
import java.util.Objects;
import java.util.Optional;

/**
 * Where notices are sent and under which rules.
 *
 * @param uri an absolute http or https URL without user-info and fragment; http only where {@code allowHttp} says so
 * @param secrets the signing secrets, at least one; all of them sign
 * @param connectTimeout how long a connection may take to come about; positive
 * @param requestTimeout how long one attempt may take, connecting included; positive
 * @param allowHttp whether the connection may be in clear text
 * @param allowPrivate whether the host may be at an address that is not of the public internet
 * @param runbookBase where the runbook is; a notice links to it with its kind as the fragment
 * @param evidenceBase where the pages of the experiments are, with a slash at its end; a notice links to its experiment
 *     there
 */
public record WebhookTarget(
        URI uri,
        List<SigningSecret> secrets,
        Duration connectTimeout,
        Duration requestTimeout,
        boolean allowHttp,
        boolean allowPrivate,
        Optional<URI> runbookBase,
        Optional<URI> evidenceBase) {

    private static final Duration CONNECT_TIMEOUT = Duration.ofSeconds(5);

    /** Within the 15 to 30 seconds that Standard Webhooks recommends. */
    private static final Duration REQUEST_TIMEOUT = Duration.ofSeconds(15);

    private static final int MAX_LINK_LENGTH = 1000;

    public WebhookTarget {
        secrets = List.copyOf(secrets);
        Objects.requireNonNull(runbookBase, "runbookBase");
        Objects.requireNonNull(evidenceBase, "evidenceBase");
        if (secrets.isEmpty()) {
            throw new IllegalArgumentException("webhook secrets: none (expected: at least one)");
        }
        requirePositive("webhook connect timeout", connectTimeout);
        requirePositive("webhook request timeout", requestTimeout);
        requireAllowed(uri, allowHttp);
        runbookBase.ifPresent(base -> requireLink("webhook runbook base", base));
        evidenceBase.ifPresent(base -> requireLink("webhook evidence base", base));
    }

    /** A target under the strictest rules and the default timeouts, without links. */
    public static WebhookTarget of(URI uri, List<SigningSecret> secrets) {
        return builder(uri, secrets).build();
    }

    /** Starts from the strictest rules and the default timeouts, without links. */
    public static Builder builder(URI uri, List<SigningSecret> secrets) {
        return new Builder(uri, secrets);
    }

    /** The target without path and query, which often hold a token: fit for logs. */
    public String origin() {
        return uri.getScheme() + "://" + uri.getHost() + (uri.getPort() < 0 ? "" : ":" + uri.getPort());
    }

    @Override
    public String toString() {
        return "WebhookTarget[" + origin() + "]";
    }

    private static void requirePositive(String name, Duration value) {
        if (!(value.compareTo(Duration.ZERO) > 0)) {
            throw new IllegalArgumentException(name + ": " + value + " (expected: more than PT0S)");
        }
    }

    private static void requireLink(String name, URI base) {
        int length = base.toString().length();
        if (length > MAX_LINK_LENGTH) {
            throw new IllegalArgumentException(
                    name + ": " + length + " characters (expected: at most " + MAX_LINK_LENGTH + ")");
        }
    }

    private static void requireAllowed(URI uri, boolean allowHttp) {
        String scheme = String.valueOf(uri.getScheme()).toLowerCase(Locale.ROOT);
        if (!scheme.equals("https") && !(scheme.equals("http") && allowHttp)) {
            String expected = allowHttp ? "https or http" : "https; http only with allow-http: true";
            throw new IllegalArgumentException("webhook url: scheme " + scheme + " (expected: " + expected + ")");
        }
        if (uri.getHost() == null) {
            throw new IllegalArgumentException("webhook url: no host in it (expected: https://host/path)");
        }
        if (uri.getRawUserInfo() != null) {
            throw new IllegalArgumentException("webhook url: user-info before the host (expected: none)");
        }
        if (uri.getRawFragment() != null) {
            throw new IllegalArgumentException("webhook url: a fragment at its end (expected: none)");
        }
    }

    /** Collects the parts of a target that have a default. */
    public static final class Builder {

        private final URI uri;
        private final List<SigningSecret> secrets;
        private Duration connectTimeout = CONNECT_TIMEOUT;
        private Duration requestTimeout = REQUEST_TIMEOUT;
        private boolean allowHttp;
        private boolean allowPrivate;
        private Optional<URI> runbookBase = Optional.empty();
        private Optional<URI> evidenceBase = Optional.empty();

        private Builder(URI uri, List<SigningSecret> secrets) {
            this.uri = Objects.requireNonNull(uri, "uri");
            this.secrets = secrets;
        }

        public Builder timeouts(Duration connect, Duration request) {
            connectTimeout = connect;
            requestTimeout = request;
            return this;
        }

        public Builder allowHttp(boolean allowed) {
            allowHttp = allowed;
            return this;
        }

        public Builder allowPrivate(boolean allowed) {
            allowPrivate = allowed;
            return this;
        }

        public Builder runbookBase(URI base) {
            runbookBase = Optional.of(base);
            return this;
        }

        public Builder evidenceBase(URI base) {
            evidenceBase = Optional.of(base);
            return this;
        }

        public WebhookTarget build() {
            return new WebhookTarget(
                    uri, secrets, connectTimeout, requestTimeout, allowHttp, allowPrivate, runbookBase, evidenceBase);
        }
    }
}
