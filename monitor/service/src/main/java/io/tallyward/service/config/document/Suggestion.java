package io.tallyward.service.config.document;

import java.util.Collection;
import java.util.Comparator;
import java.util.Optional;

/** Guesses which key or other name was meant. */
public final class Suggestion {

    /** Two slips of the finger; a third makes another word of most keys. */
    private static final int MAX_DISTANCE = 2;

    private Suggestion() {}

    /** The path of the key that was probably meant: a sibling with a similar name, or the same name elsewhere. */
    static Optional<String> forKey(String written, Shape shape, Place place) {
        return among(written, shape.keys().stream().map(Key::name).toList())
                .map(known -> place.key(known).path())
                .or(() -> elsewhere(written, place.root(), ""));
    }

    /** The nearest of the known names, if it is near enough to have been meant. */
    public static Optional<String> among(String written, Collection<String> names) {
        return names.stream()
                .filter(known -> distance(written, known) <= Math.min(MAX_DISTANCE, known.length() / 2))
                .min(Comparator.comparingInt(known -> distance(written, known)));
    }

    private static Optional<String> elsewhere(String written, Shape shape, String path) {
        for (Key<?> key : shape.keys()) {
            String here = Place.join(path, key.name());
            if (key.name().equals(written)) {
                return Optional.of(here);
            }
            if (key.type() instanceof Shape inner) {
                Optional<String> deeper = elsewhere(written, inner, here);
                if (deeper.isPresent()) {
                    return deeper;
                }
            }
        }
        return Optional.empty();
    }

    /**
     * How many insertions, deletions, substitutions and swaps of neighbours lead from one word to the other (optimal string
     * alignment distance).
     */
    static int distance(String from, String to) {
        int[][] cost = new int[from.length() + 1][to.length() + 1];
        for (int i = 0; i <= from.length(); i++) {
            for (int j = 0; j <= to.length(); j++) {
                cost[i][j] = i == 0 || j == 0 ? i + j : step(cost, from, to, i, j);
            }
        }
        return cost[from.length()][to.length()];
    }

    private static int step(int[][] cost, String from, String to, int i, int j) {
        int substitution = from.charAt(i - 1) == to.charAt(j - 1) ? 0 : 1;
        int best = Math.min(cost[i - 1][j - 1] + substitution, Math.min(cost[i - 1][j], cost[i][j - 1]) + 1);
        boolean swapped =
                i > 1 && j > 1 && from.charAt(i - 1) == to.charAt(j - 2) && from.charAt(i - 2) == to.charAt(j - 1);
        return swapped ? Math.min(best, cost[i - 2][j - 2] + 1) : best;
    }
}
