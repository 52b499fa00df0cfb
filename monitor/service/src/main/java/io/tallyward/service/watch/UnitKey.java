package io.tallyward.service.watch;

import io.tallyward.service.config.Secret;
import io.tallyward.service.config.ServiceConfig;
import java.nio.charset.StandardCharsets;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/** The key of the unit hash. Without one of its own a service uses a key derived from its name, which is no secret. */
final class UnitKey {

    private static final Logger LOG = LoggerFactory.getLogger(UnitKey.class);

    private UnitKey() {}

    static byte[] of(ServiceConfig config) {
        if (config.unitKey().isPresent()) {
            return config.unitKey().map(Secret::reveal).orElseThrow();
        }
        LOG.warn(
                "No unit-key is configured: the hashes that stand for units in {}-count-state could be reversed by"
                        + " guessing identifiers. Set unit-key.file or unit-key.environment before the first event is counted.",
                config.name());
        return ("tallyward unit key of " + config.name()).getBytes(StandardCharsets.UTF_8);
    }
}
