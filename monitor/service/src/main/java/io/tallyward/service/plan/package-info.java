/**
 * From plan files to plans. {@link io.tallyward.service.plan.PlanKeys} is the single place of every key of a plan file;
 * {@link io.tallyward.service.plan.PlanRules} holds what must hold between keys. A directory is read as a whole: either
 * every plan in it is sound or all that is wrong in any file is reported together.
 */
package io.tallyward.service.plan;
