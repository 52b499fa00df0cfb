package io.tallyward.engine.verify;

import java.util.List;
import java.util.Locale;

/**
 * The first thing that is wrong with the log of one experiment.
 *
 * @param experiment name of the experiment
 * @param sequence number of the record, as it says itself
 * @param kind what is wrong
 * @param sentence the same in words, with what was found
 * @param action what to do, in one sentence
 * @param differences where the record is not what it should be; empty when it is its place that is wrong
 */
public record Finding(
        String experiment, int sequence, Kind kind, String sentence, String action, List<Difference> differences) {

    public Finding {
        differences = List.copyOf(differences);
    }

    /** What is wrong. The codes are published and stable. */
    public enum Kind {
        /** The log does not begin with the experiment's first record. */
        NO_BEGINNING,
        /** Records are missing. */
        GAP,
        /** The same record stands there twice. */
        REPEATED,
        /** Two records claim the same place. */
        TWO_CHAINS,
        /** The record does not have the digest it names as its own. */
        HASH,
        /** It does not follow the record before it. */
        LINK,
        /** It was written by other rules than these. */
        VERSION,
        /** It is not what its own counts lead to. */
        CONTENT;

        /** The published code, as in {@code two-chains}. */
        public String code() {
            return name().toLowerCase(Locale.ROOT).replace('_', '-');
        }
    }
}
