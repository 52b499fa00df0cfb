/**
 * What a plan does when it is carried out a thousand times: simulated counts go through the real deciding rules, and the
 * records these emit are read as an owner would read them. How often a boundary is crossed, how long that takes and how far
 * off the estimates are follows from nothing but the plan, the true rates and a seed. Pure but for the threads, which share
 * the work and cannot be seen in the result.
 */
package io.tallyward.service.rehearse;
