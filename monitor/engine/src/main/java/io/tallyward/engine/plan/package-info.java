/**
 * What the owner of an experiment decided before the first event was counted: how to count, how to test, when to look
 * and when to end. A plan is a value; its {@linkplain io.tallyward.engine.plan.PlanDigest digest} names its meaning, not
 * its formatting, and stands in every decision taken under it.
 */
package io.tallyward.engine.plan;
