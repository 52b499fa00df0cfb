/**
 * From a spending rule and the information seen so far to boundaries, and from boundaries to what a design is worth.
 *
 * <p>The statistic at look k is {@code Z_k = B(t_k) / sqrt(t_k)}: a Brownian motion with drift, watched at information
 * {@code t_k}, measured relative to the planned maximum. Between looks it moves by independent normal steps, so what is
 * still running at one look is a density that the next step smears out and the next pair of boundaries cuts off
 * (Armitage, McPherson and Rowe, JRSS A 132 (1969) 235-244; Jennison and Turnbull, "Group Sequential Methods", 2000,
 * chapter 19). {@link io.tallyward.statistics.boundary.BoundarySequence} walks along it one look at a time, as looks
 * happen; {@link io.tallyward.statistics.boundary.FutilitySequence} does so under the drift worth finding;
 * {@link io.tallyward.statistics.boundary.ExitProbabilities} follows given boundaries; and
 * {@link io.tallyward.statistics.boundary.Design} plans the whole. Tests older than spending functions are here too, with
 * their constants: {@link io.tallyward.statistics.boundary.ClassicalConstants}.
 *
 * <p>The density is carried on quadrature nodes that depend on nothing but the looks, so a sequence resumed from stored
 * looks continues with the same bits as one that was never interrupted.
 */
package io.tallyward.statistics.boundary;
