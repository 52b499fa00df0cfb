package io.tallyward.engine.decide;

/** How much a decision record says beyond the decision. It changes the records and never what is decided. */
public enum Detail {
    /** Everything: estimates adjusted for the looks, and the outlook on the rest of the run. */
    FULL,
    /** Only what decides, without reasons, digests and notices; for rehearsals that count verdicts. */
    BARE
}
