package io.tallyward.engine.count;

/** A unit as the ledger knows it: 128 bits of a keyed hash of its identifier. */
record UnitHash(long high, long low) {

    @Override
    public int hashCode() {
        return (int) (low ^ (low >>> 32));
    }
}
