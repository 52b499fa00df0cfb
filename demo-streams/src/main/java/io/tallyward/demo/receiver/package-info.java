/**
 * The other end of the webhook: an independent receiver as a customer would write one. It checks the Standard Webhooks
 * signature over the raw bytes before it believes any of them, takes each message id once however often it is delivered,
 * and answers 204. It shares no code with the sender.
 */
package io.tallyward.demo.receiver;
