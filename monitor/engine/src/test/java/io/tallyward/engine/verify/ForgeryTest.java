package io.tallyward.engine.verify;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.verify.Forgery.Changed;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;
import java.util.concurrent.ConcurrentSkipListMap;
import java.util.concurrent.atomic.LongAdder;
import org.junit.jupiter.api.Test;

/** Every record of logs of every shape, changed in every place, one at a time. */
class ForgeryTest {

    private static final Map<String, List<DecisionRecord>> RUNS = RecordedRuns.all();

    /** What comes from windows between records, so that no record of a chain can tell it: a place, and why. */
    private static final Map<String, String> SEALED_ONLY = new TreeMap<>(
            Map.of(
                    "counts[].unitTotals.*",
                    "of a variant that the record does not look at: they enter its variance and nothing else",
                    "amendment.reason",
                    "why the plan was amended, in the owner's words",
                    "idleSealed",
                    "how many windows were sealed while a partition was idle; at most as many as there were",
                    "outcomes.(repeat|expired|crossover|orphan|late|outside|duplicate)",
                    "what became of single events; crossovers and late ones only have to lead to the trust that is told",
                    "windowEnd a window (earlier|later)",
                    "of a look by information or of a change of trust: another window at which the same would have been decided"));

    @Test
    void isFoundWhereverARecordWasChanged() {
        LongAdder changes = new LongAdder();
        RUNS.values().parallelStream().forEach(records -> {
            for (int i = 0; i < records.size(); i++) {
                for (Changed changed : Forgery.all(records.get(i))) {
                    String place = changed.path() + " in record " + (i + 1) + " of "
                            + records.get(i).experiment();
                    assertTrue(isFound(Forgery.with(records, i, changed.record())), place);
                    changes.increment();
                }
            }
        });
        assertTrue(changes.sum() > 9_000, "changes: " + changes);
    }

    @Test
    void isFoundThoughTheWholeChainWasSealedAgainUnlessOnlyTheSealCouldTell() {
        Map<String, String> missed = new ConcurrentSkipListMap<>();
        RUNS.values().parallelStream().forEach(records -> {
            for (int i = 0; i < records.size(); i++) {
                for (Changed changed : Forgery.all(records.get(i))) {
                    boolean seal =
                            changed.path().startsWith("hash") || changed.path().startsWith("previous");
                    if (!seal && !isFound(Forgery.chained(Forgery.with(records, i, changed.record())))) {
                        missed.put(
                                changed.path().replaceAll("\\[[0-9]+]", "[]"),
                                "record " + (i + 1) + " of " + records.get(i).experiment());
                    }
                }
            }
        });
        Set<String> known = new TreeSet<>();
        missed.keySet().removeIf(path -> {
            Optional<String> place = SEALED_ONLY.keySet().stream()
                    .filter(pattern -> path.matches(pattern.replace("[]", "\\[]") + ".*"))
                    .findFirst();
            place.ifPresent(known::add);
            return place.isPresent();
        });
        assertEquals(Map.of(), missed);
        assertEquals(SEALED_ONLY.keySet(), known, "a place that is always found needs no excuse");
    }

    private static boolean isFound(List<DecisionRecord> records) {
        RecordVerifier verifier = new RecordVerifier();
        for (DecisionRecord record : records) {
            if (verifier.take(record).isPresent()) {
                return true;
            }
        }
        return false;
    }
}
