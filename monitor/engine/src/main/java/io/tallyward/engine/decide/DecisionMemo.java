package io.tallyward.engine.decide;

import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import java.util.HashMap;
import java.util.Map;
import java.util.function.Supplier;

/**
 * Remembers what deciding under a plan takes long to compute and what depends on nothing but the plan and the information
 * at its looks: designs, and the bounds of looks. It changes how long a decision takes and never what is decided. Worth its
 * memory where one plan is decided many times, as in a rehearsal. Bounded; not thread-safe.
 */
public final class DecisionMemo {

    private final int mostLooks;
    private int looks;
    private final Map<Designed, PlanDesign> designs = new HashMap<>();
    private final Map<String, Node> paths = new HashMap<>();

    /**
     * A memo that knows nothing yet.
     *
     * @param mostLooks looks it remembers at most, over all paths; 0 to remember designs alone
     */
    public DecisionMemo(int mostLooks) {
        if (!(mostLooks >= 0)) {
            throw new IllegalArgumentException("mostLooks: " + mostLooks + " (expected: 0 or more)");
        }
        this.mostLooks = mostLooks;
    }

    /**
     * What a design follows from: everything of a plan but its texts, so that experiments which are planned alike share one. Of
     * many looks it takes long to compute, and much room.
     */
    private record Designed(Plan plan, Variant challenger) {}

    PlanDesign design(Plan plan, Variant challenger) {
        return designs.computeIfAbsent(
                new Designed(withoutTexts(plan), challenger), key -> PlanDesign.of(plan, challenger));
    }

    private static Plan withoutTexts(Plan plan) {
        return new Plan(
                "",
                "",
                "",
                plan.count(),
                plan.variants(),
                plan.test(),
                plan.looks(),
                plan.futility(),
                plan.splitCheck(),
                plan.trust(),
                plan.run(),
                plan.epochs(),
                plan.amendments());
    }

    /** The beginning of all paths of a challenger at its levels. */
    Node path(String planDigest, Variant challenger, TailLevels levels) {
        return mostLooks == 0
                ? Node.FORGETFUL
                : paths.computeIfAbsent(
                        planDigest + ' ' + challenger.name() + ' ' + levels, key -> new Node(this, null));
    }

    private boolean takeRoom() {
        return looks < mostLooks && looks++ < mostLooks;
    }

    /** A look of some path, and the looks that have been seen to follow it. */
    static final class Node {

        /** Remembers nothing. */
        static final Node FORGETFUL = new Node(null, null);

        private final DecisionMemo memo;
        private final LookPath.Bounds bounds;
        private final Map<LookPath.Request, Node> following;

        private Node(DecisionMemo memo, LookPath.Bounds bounds) {
            this.memo = memo;
            this.bounds = bounds;
            following = memo == null ? Map.of() : new HashMap<>();
        }

        /** The bounds of the look that follows this one with a request. */
        LookPath.Bounds find(LookPath.Request request, Supplier<LookPath.Bounds> solution) {
            Node known = following.get(request);
            if (known != null) {
                return known.bounds;
            }
            LookPath.Bounds solved = solution.get();
            if (memo != null && memo.takeRoom()) {
                following.put(request, new Node(memo, solved));
            }
            return solved;
        }

        /** The look that follows this one with a request, as far as it is remembered. */
        Node after(LookPath.Request request) {
            return following.getOrDefault(request, FORGETFUL);
        }
    }
}
