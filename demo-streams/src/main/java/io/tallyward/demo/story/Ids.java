package io.tallyward.demo.story;

/**
 * Identifiers that look random and never repeat: a counter sent through a bijection of 64-bit numbers, the finaliser of
 * SplitMix64 (Steele, Lea, Flood 2014, figure 16, doi:10.1145/2660193.2660195; variant 13 of Stafford's constants, from
 * memory).
 */
final class Ids {

    private final long salt;
    private final long first;
    private long used;

    /**
     * Ids of one story.
     *
     * @param seed of the scenario
     * @param story number of the story; keeps the ids of stories apart, for up to 2^40 events each
     */
    Ids(long seed, int story) {
        salt = mix(seed);
        first = ((long) story << 40) + 1;
    }

    long next() {
        return at(used++);
    }

    /** The id that the call of {@link #next()} with this number, from 0, returns. */
    long at(long index) {
        return mix((first + index) ^ salt);
    }

    static long mix(long value) {
        long z = value;
        z = (z ^ (z >>> 30)) * 0xbf58476d1ce4e5b9L;
        z = (z ^ (z >>> 27)) * 0x94d049bb133111ebL;
        return z ^ (z >>> 31);
    }
}
