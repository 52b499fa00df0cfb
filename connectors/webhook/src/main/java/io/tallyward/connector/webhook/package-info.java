/**
 * Telling people, by webhook. A notice becomes a CloudEvents 1.0 event ({@link io.tallyward.connector.webhook.NoticeBody}),
 * is signed as Standard Webhooks asks ({@link io.tallyward.connector.webhook.WebhookSigner}), sent to one target under its
 * rules ({@link io.tallyward.connector.webhook.WebhookSender}), and tried again for days if need be
 * ({@link io.tallyward.connector.webhook.DeliveryQueue}).
 *
 * <p>The promise is at least once. The id of a message is the notice's own, derived from the decision and the same at
 * every attempt and after every restart: a receiver that remembers ids sees each notice once. The timestamp that is signed
 * is that of the attempt, so that a receiver can refuse old messages without refusing late ones.
 *
 * <p>What cannot be delivered is never dropped in silence: it is parked where the status shows it, counted, and logged. A
 * receiver that answers 410 disables its target, which is as visible. Redirects are not followed, addresses that are not
 * of the public internet are refused unless allowed, answers are read within bounds, and neither bodies nor secrets nor
 * the paths of URLs are ever logged.
 *
 * <p>The CloudEvents rules for web hooks ask for bearer tokens and a handshake; this package follows CloudEvents for the
 * form of the body only.
 */
package io.tallyward.connector.webhook;
