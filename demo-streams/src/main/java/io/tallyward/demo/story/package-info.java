/**
 * What happens on Northwater's booking page, told from a seed. Northwater is an invented ferry operator; every id, rate
 * and time here is invented too.
 *
 * <p>A {@link io.tallyward.demo.story.Story} says what is true of one experiment: how often each variant is really
 * clicked, how traffic is really split, what a monitor ought to conclude and how certain that conclusion is. A
 * {@link io.tallyward.demo.story.Scenario} tells all stories at once and lays their events in the order of arrival. Most
 * visits are plain; some carry a {@link io.tallyward.demo.story.Twist}, one disturbance that a real pipeline would have:
 * a delayed view, a click that overtakes its view, a visitor who sees two variants, a clock that runs ahead. A unit has
 * at most one twist, so that what ought to become of each event is never in doubt.
 *
 * <p>The whole stream is a function of the seed. Nothing depends on the wall clock or on how fast the stream is sent.
 *
 * <p>The stories are outsiders to the monitor: they know the wire format and the published counting rules, and import
 * nothing that the monitor counts or tests with.
 */
package io.tallyward.demo.story;
