/**
 * What may be said about the effect once one has looked.
 *
 * <p>A test that stops because z is large has, on average, caught z on an upswing. The ordinary p-value, estimate and
 * interval ignore this and promise too much. {@link io.tallyward.statistics.inference.StagewiseInference} says what is true
 * after a stop; {@link io.tallyward.statistics.inference.RepeatedInterval} what is true at any look, stop or not; and
 * {@link io.tallyward.statistics.inference.ConditionalPower} what may still come of a test that goes on.
 *
 * <p>All of it is on the scale of the drift, the expected z at the planned maximum of information.
 * {@link io.tallyward.statistics.inference.EffectScale} turns drifts into differences of rates,
 * {@link io.tallyward.statistics.inference.LiftScale} turns those into relative lifts.
 */
package io.tallyward.statistics.inference;
