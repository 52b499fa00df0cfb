package io.tallyward.service.config;

import java.net.URI;
import java.util.Optional;

/**
 * Whom to tell. Its text leaves out the path of the address, which often is a password in disguise.
 *
 * @param url where to post notices
 * @param secret key of their signature
 * @param allowHttp whether the address may be plain http
 * @param allowPrivate whether the address may lie in a private network
 * @param runbook where the runbook is found; a notice links to its section. Empty: notices link to none
 * @param pages where the pages of the experiments are found by whoever is told; empty: where they are served
 */
public record WebhookConfig(
        URI url, Secret secret, boolean allowHttp, boolean allowPrivate, Optional<URI> runbook, Optional<URI> pages) {

    @Override
    public String toString() {
        return "WebhookConfig[url=" + url.getScheme() + "://" + url.getRawAuthority() + "/..., secret=" + secret
                + ", allowHttp=" + allowHttp + ", allowPrivate=" + allowPrivate + "]";
    }
}
