/**
 * The stream on the wire: JSON records keyed by unit, sent to a topic at a chosen speed or written to a file. The record's
 * timestamp is the moment of arrival, as it would be with any real producer; a file carries it in the member
 * {@code received}. Speed changes when records are sent, never what they say.
 */
package io.tallyward.demo.stream;
