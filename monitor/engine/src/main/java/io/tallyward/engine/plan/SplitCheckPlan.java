package io.tallyward.engine.plan;

import java.util.List;

/**
 * The watch over the traffic split.
 *
 * @param alpha level of the sequential sample-ratio test over the whole run, in (0, 0.5)
 * @param segments names of the segment fields by which units are counted besides, so that a mismatch can be traced; in the
 *     order of their names, whatever order they were given in; at most {@value #MOST_SEGMENTS}
 */
public record SplitCheckPlan(double alpha, List<String> segments) {

    /** One false alarm in a thousand experiments: low, because a mismatch withholds every verdict. */
    public static final double DEFAULT_ALPHA = 0.001;

    /** More fields than this would cost memory for every unit's combination of values and tell little more. */
    public static final int MOST_SEGMENTS = 4;

    public SplitCheckPlan {
        segments = segments.stream().sorted().distinct().toList();
        if (segments.size() > MOST_SEGMENTS) {
            throw new IllegalArgumentException(
                    "segments: " + segments.size() + " (expected: at most " + MOST_SEGMENTS + ")");
        }
    }

    /** A watch that counts by no segment. */
    public SplitCheckPlan(double alpha) {
        this(alpha, List.of());
    }
}
