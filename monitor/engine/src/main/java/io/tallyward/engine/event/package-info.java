/**
 * What happened to a visitor, as the engine understands it: a view or a click of one variant of one experiment by one
 * unit, at one moment of event time. How bytes become events is the business of the format connectors; whether an event
 * counts, and as what, is the business of {@link io.tallyward.engine.count}.
 */
package io.tallyward.engine.event;
