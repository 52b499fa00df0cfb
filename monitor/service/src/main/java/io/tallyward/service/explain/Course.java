package io.tallyward.service.explain;

import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.Variant;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import java.util.ArrayList;
import java.util.LinkedHashMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalInt;

/** Follows the records of one experiment, in their order, to the one that is to be explained. Not thread-safe. */
public final class Course {

    private final OptionalInt wanted;
    private Plan plan;
    private Map<String, Standing> standings = Map.of();
    private int looks;
    private Moment chosen;
    private DecisionRecord last;

    /** @param look number of the record with a look, from 1; empty for the one that settled the experiment, or the last one */
    public Course(OptionalInt look) {
        wanted = look;
    }

    /** Takes the next record. Those before the plan are passed over: there is nothing to understand them by. */
    public void take(DecisionRecord record) {
        last = record;
        if (record.occasion() == Occasion.PLAN) {
            begin(record.plan());
        }
        if (plan == null) {
            return;
        }
        if (record.occasion() == Occasion.AMENDED) {
            List<Amendment> amendments = new ArrayList<>(plan.amendments());
            amendments.add(record.amendment());
            plan = plan.amended(amendments);
        }
        follow(record);
        choose(record);
    }

    private void begin(Plan frozen) {
        plan = frozen;
        standings = new LinkedHashMap<>();
        for (Variant challenger : frozen.challengers()) {
            standings.put(challenger.name(), Standing.WAITING);
        }
    }

    private void follow(DecisionRecord record) {
        boolean sound = record.trust() == Trust.SOUND;
        Map<String, Standing> next = new LinkedHashMap<>(standings);
        if (sound) {
            next.replaceAll((variant, standing) -> standing.released());
        }
        for (Comparison look : record.comparisons()) {
            next.computeIfPresent(look.variant(), (variant, standing) -> standing.after(look, record));
        }
        if (record.occasion() == Occasion.END || !record.windowEnd().isBefore(plan.end())) {
            boolean stopped = plan.stopped();
            Verdict how = stopped ? Verdict.STOPPED : Verdict.EXHAUSTED;
            next.replaceAll((variant, standing) -> standing.ended(how, sound || stopped));
        }
        standings = next;
        looks += record.occasion() == Occasion.LOOK ? 1 : 0;
    }

    private void choose(DecisionRecord record) {
        Moment now = new Moment(plan, record, looks, standings);
        boolean look = record.occasion() == Occasion.LOOK;
        if (wanted.isPresent()) {
            chosen = look && looks == wanted.getAsInt() ? now : chosen;
        } else if (chosen == null || !chosen.settled()) {
            boolean told = chosen == null || chosen.record().comparisons().isEmpty() || look || now.settled();
            boolean held = standings.values().stream().anyMatch(standing -> standing.held() != null);
            chosen = told || held || record.trust() != chosen.record().trust() ? now : chosen;
        }
    }

    /** How many records with a look there have been. */
    public int looks() {
        return looks;
    }

    /** The explanation; empty if there is no plan, or no such look. */
    public Optional<Explanation> explanation() {
        return Optional.ofNullable(chosen).map(moment -> new Explanation(moment, last));
    }
}
