package io.tallyward.service.config;

import io.tallyward.service.config.document.DocumentReader;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.Values;
import java.io.IOException;
import java.io.InputStream;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.InvalidPathException;
import java.nio.file.Path;
import java.util.Base64;
import java.util.Map;
import java.util.Optional;

/** Fetches secrets from where the configuration says they are. What it reports never contains what it found. */
final class SecretReader {

    /** Signing secrets carry this mark, by the Standard Webhooks specification. */
    static final String SIGNING_PREFIX = "whsec_";

    private static final int MAX_BYTES = 4_096;
    private static final int MIN_UNIT_KEY_BYTES = 16;
    private static final int MIN_SIGNING_BYTES = 24;
    private static final int MAX_SIGNING_BYTES = 64;

    /** The fewest bytes that will do, which fill whole groups of Base64: no padding. */
    private static final String MAKE_SIGNING =
            "Make one with: printf '" + SIGNING_PREFIX + "%s\\n' \"$(openssl rand -base64 24)\"";

    private static final String MAKE_UNIT_KEY = "Make one with: head -c 32 /dev/urandom | base64";

    private final Path directory;
    private final Map<String, String> environment;

    SecretReader(Path directory, Map<String, String> environment) {
        this.directory = directory;
        this.environment = environment;
    }

    /** The signing secret as written, prefix included. */
    Optional<Secret> signingSecret(Values section) {
        Key<String> file = ConfigKeys.Webhook.SECRET_FILE;
        Key<String> variable = ConfigKeys.Webhook.SECRET_ENVIRONMENT;
        Optional<Secret> secret = read(section, file, variable);
        secret.filter(found -> !isSigningSecret(found))
                .ifPresent(found -> section.refuse(
                        section.gives(file) ? file : variable,
                        "the " + found + " is not of the required form",
                        SIGNING_PREFIX + " followed by the Base64 of " + MIN_SIGNING_BYTES + " to " + MAX_SIGNING_BYTES
                                + " random bytes",
                        MAKE_SIGNING));
        return secret;
    }

    Optional<Secret> unitKey(Values section) {
        Key<String> file = ConfigKeys.UnitKey.FILE;
        Key<String> variable = ConfigKeys.UnitKey.ENVIRONMENT;
        Optional<Secret> secret = read(section, file, variable);
        secret.filter(found -> found.length() < MIN_UNIT_KEY_BYTES)
                .ifPresent(found -> section.refuse(
                        section.gives(file) ? file : variable,
                        "the " + found + " has " + found.length() + (found.length() == 1 ? " byte" : " bytes"),
                        "at least " + MIN_UNIT_KEY_BYTES + " bytes",
                        MAKE_UNIT_KEY));
        return secret;
    }

    private Optional<Secret> read(Values section, Key<String> fileKey, Key<String> variableKey) {
        Optional<String> file = section.find(fileKey);
        Optional<String> variable = section.find(variableKey);
        if (section.gives(fileKey) == section.gives(variableKey)) {
            section.refuse(
                    section.gives(fileKey) ? "both are given" : "neither is given",
                    "either " + fileKey.name() + " or " + variableKey.name());
            return Optional.empty();
        }
        return file.flatMap(name -> fromFile(section, fileKey, name))
                .or(() -> variable.flatMap(name -> fromEnvironment(section, variableKey, name)));
    }

    private Optional<Secret> fromFile(Values section, Key<String> key, String written) {
        String shown = written.startsWith(SIGNING_PREFIX) ? "a secret instead of a file name" : written;
        try (InputStream in = Files.newInputStream(directory.resolve(written))) {
            byte[] bytes = in.readNBytes(MAX_BYTES + 1);
            String text = new String(bytes, StandardCharsets.UTF_8).strip();
            if (bytes.length <= MAX_BYTES && !text.isEmpty()) {
                return Optional.of(new Secret("file " + written, text.getBytes(StandardCharsets.UTF_8)));
            }
            section.refuse(key, shown + " has " + (text.isEmpty() ? "no text" : "too much text"), "one line of text");
        } catch (InvalidPathException e) {
            section.refuse(key, "not a file name", "a file that holds the secret");
        } catch (IOException e) {
            section.refuse(key, shown + " cannot be read: " + DocumentReader.reason(e), "a file that holds the secret");
        }
        return Optional.empty();
    }

    private Optional<Secret> fromEnvironment(Values section, Key<String> key, String variable) {
        if (!variable.matches("[A-Za-z_][A-Za-z0-9_]*")) {
            section.refuse(key, "not a name", "the name of an environment variable, not the secret itself");
            return Optional.empty();
        }
        String value = environment.getOrDefault(variable, "").strip();
        if (value.isEmpty()) {
            section.refuse(
                    key,
                    variable + " is not set",
                    "an environment variable that holds the secret",
                    "Set " + variable + ".");
            return Optional.empty();
        }
        return Optional.of(new Secret("environment variable " + variable, value.getBytes(StandardCharsets.UTF_8)));
    }

    private static boolean isSigningSecret(Secret secret) {
        String text = new String(secret.reveal(), StandardCharsets.UTF_8);
        if (!text.startsWith(SIGNING_PREFIX)) {
            return false;
        }
        try {
            int bytes = Base64.getDecoder().decode(text.substring(SIGNING_PREFIX.length())).length;
            return bytes >= MIN_SIGNING_BYTES && bytes <= MAX_SIGNING_BYTES;
        } catch (IllegalArgumentException e) {
            return false;
        }
    }
}
