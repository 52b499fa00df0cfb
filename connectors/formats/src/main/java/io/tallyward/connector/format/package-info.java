/**
 * Between bytes and values. Three kinds of JSON cross the borders of the monitor, and this package holds all of them.
 *
 * <p><b>Events</b> come from pipelines that were there first, so the document's shape is theirs: a
 * {@link io.tallyward.connector.format.EventMapping} says by JSON Pointer (RFC 6901) where each field is, and a
 * {@link io.tallyward.connector.format.JsonEventReader} turns bytes into an event or into the reason why they are none.
 * The input is foreign and perhaps hostile: every length, depth and number is bounded, nothing is thrown, and no message
 * repeats a unit's identifier.
 *
 * <p><b>Tallies, decision records and notices</b> are the monitor's own: {@link io.tallyward.connector.format.TallyJson},
 * {@link io.tallyward.connector.format.DecisionJson} and {@link io.tallyward.connector.format.NoticeJson} write each
 * component under its own name and read it back to an equal value, doubles to the last bit. Reading is strict about what
 * is missing, because a hole in a record is damage, and tolerant of what is unknown, because newer versions may say more.
 *
 * <p>The JSON Schemas (draft 2020-12) of what others may rely on are resources of this module:
 * {@code schema/event.schema.json} for events under the default mapping, {@code schema/decision.schema.json} and
 * {@code schema/notice.schema.json}.
 */
package io.tallyward.connector.format;
