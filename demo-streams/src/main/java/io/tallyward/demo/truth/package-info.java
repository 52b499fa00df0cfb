/**
 * What a monitor must have counted when it has read the whole stream, kept by the side that made the stream.
 *
 * <p>The bookkeeping is independent of the monitor's: it imports nothing of it and works the other way round. A monitor
 * sees records one by one and must decide with what it knows; here all events of a unit lie on the table at once, each
 * with the teller's own word on whether it was delivered in time. Windows, watermarks and open ledgers do not occur. The
 * rules are the published counting rules for units: the earliest view in time fixes variant and window, ties go to the
 * event whose id has the lesser CRC-32, a click under the same variant within the attribution time (both ends included) makes a success.
 *
 * <p>Partitions matter for one thing only: an experiment that outlasts the stream has windows at its end that no monitor
 * can have sealed. {@link io.tallyward.demo.truth.Truth#sealedUntilMillis} says up to where each partition must be sealed.
 */
package io.tallyward.demo.truth;
