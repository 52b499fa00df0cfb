package io.tallyward.service.status;

import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import java.util.ArrayList;
import java.util.List;
import java.util.concurrent.CopyOnWriteArrayList;

/** The health of the process: that of all its parts. Thread-safe. */
public final class HealthBoard {

    private final List<HealthSource> sources = new CopyOnWriteArrayList<>();

    /** Includes a part from now on. */
    public void add(HealthSource source) {
        sources.add(source);
    }

    /** Leaves a part out from now on. */
    public void remove(HealthSource source) {
        sources.remove(source);
    }

    /** How every part is, in the order of their inclusion. A part that cannot answer counts as down. */
    public List<Health> checks() {
        List<Health> checks = new ArrayList<>();
        for (HealthSource source : sources) {
            checks.add(ask(source));
        }
        return List.copyOf(checks);
    }

    /** Whether work is done: every part is {@link State#OK}, and there is at least one. */
    public static boolean ready(List<Health> checks) {
        return !checks.isEmpty() && checks.stream().allMatch(check -> check.state() == State.OK);
    }

    /** Whether the process is worth keeping: no part is {@link State#BROKEN}. */
    public static boolean alive(List<Health> checks) {
        return checks.stream().noneMatch(check -> check.state() == State.BROKEN);
    }

    private static Health ask(HealthSource source) {
        try {
            return source.health();
        } catch (RuntimeException e) {
            return new Health(
                    source.getClass().getSimpleName(), State.DOWN, "The part cannot say how it is: " + e + ".");
        }
    }
}
