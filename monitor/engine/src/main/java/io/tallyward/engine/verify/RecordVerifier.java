package io.tallyward.engine.verify;

import io.tallyward.engine.EngineVersion;
import io.tallyward.engine.decide.Objection;
import io.tallyward.engine.decide.Recomputation;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.RecordDigest;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.TreeMap;

/**
 * Verifies logs of decisions: takes the records of any number of experiments, those of one experiment in their order, and
 * tells the first record of each that is wrong. Keeps for each experiment its last record and what deciding keeps, whatever
 * the length of its log. Not thread-safe.
 *
 * <p>What no log can prove by itself: that its last record is the last there was, and that its first plan is the one the
 * owner froze. For the one compare with the topic, for the other the plan's digest with one kept elsewhere.
 */
public final class RecordVerifier {

    private final Map<String, Chain> chains = new TreeMap<>();

    /**
     * Takes the next record.
     *
     * @return what is wrong, if it is and nothing was wrong with the experiment before; later records of an experiment with a
     *     finding are counted only
     */
    public Optional<Finding> take(DecisionRecord record) {
        return chains.computeIfAbsent(record.experiment(), name -> new Chain()).take(record);
    }

    /**
     * How far the log of an experiment was verified.
     *
     * @param records how many records were taken
     * @param verified how many of them are right; all before the first that is wrong
     * @param last the last record that is right; null when none is
     */
    public record Standing(long records, long verified, DecisionRecord last) {}

    /** Where every experiment stands, by name. */
    public Map<String, Standing> standings() {
        Map<String, Standing> standings = new TreeMap<>();
        chains.forEach((experiment, chain) ->
                standings.put(experiment, new Standing(chain.records, chain.verified, chain.last)));
        return standings;
    }

    /** The records of one experiment so far. */
    private static final class Chain {

        private static final String CHANGED =
                "The log was changed or damaged after it was written: take it from the topic again, or from a copy.";
        private static final String INCOMPLETE = "Verify the log from its beginning, all of it and in its order.";
        private static final String DISTRUST =
                "Believe neither this record nor those after it: replay the events under the"
                        + " plan of the first record and compare.";

        private Recomputation recomputation;
        private DecisionRecord last;
        private long records;
        private long verified;
        private boolean broken;

        Optional<Finding> take(DecisionRecord record) {
            records++;
            if (broken) {
                return Optional.empty();
            }
            Optional<Finding> finding = place(record)
                    .or(() -> chain(record))
                    .or(() -> version(record))
                    .or(() -> content(record));
            broken = finding.isPresent();
            if (!broken) {
                last = record;
                verified++;
            }
            return finding;
        }

        private Optional<Finding> place(DecisionRecord record) {
            int expected = last == null ? 1 : last.sequence() + 1;
            if (record.sequence() == expected) {
                return Optional.empty();
            }
            if (last == null) {
                return found(
                        record,
                        Finding.Kind.NO_BEGINNING,
                        "the log begins with record " + record.sequence()
                                + ": the plan, and what was decided before, are missing",
                        INCOMPLETE);
            }
            if (record.sequence() > expected) {
                return found(
                        record,
                        Finding.Kind.GAP,
                        "record " + last.sequence() + " is followed by record " + record.sequence() + ": "
                                + (record.sequence() - expected) + " missing in between",
                        INCOMPLETE);
            }
            return record.equals(last)
                    ? found(
                            record,
                            Finding.Kind.REPEATED,
                            "record " + record.sequence() + " stands there twice",
                            INCOMPLETE)
                    : found(
                            record,
                            Finding.Kind.TWO_CHAINS,
                            "after record " + last.sequence() + " comes another record " + record.sequence()
                                    + ": these are two chains",
                            "Find out which monitor wrote the other one, and verify each chain by itself.");
        }

        private Optional<Finding> chain(DecisionRecord record) {
            String hash = RecordDigest.of(record);
            if (!hash.equals(record.hash())) {
                return found(
                        record,
                        Finding.Kind.HASH,
                        "the record does not have the digest that it names",
                        CHANGED,
                        new Difference("hash", record.hash(), hash));
            }
            String previous = last == null ? DecisionRecord.NO_PREVIOUS : last.hash();
            if (!previous.equals(record.previous())) {
                return found(
                        record,
                        Finding.Kind.LINK,
                        last == null
                                ? "the first record names one before it"
                                : "the record does not follow record " + last.sequence() + " of this log",
                        CHANGED,
                        new Difference("previous", record.previous(), previous));
            }
            return Optional.empty();
        }

        private Optional<Finding> version(DecisionRecord record) {
            return record.engineVersion().equals(EngineVersion.CURRENT)
                    ? Optional.empty()
                    : found(
                            record,
                            Finding.Kind.VERSION,
                            "the record was written under deciding rules " + record.engineVersion()
                                    + ", these are rules " + EngineVersion.CURRENT,
                            "Verify it with a version that has the same rules.",
                            new Difference("engineVersion", record.engineVersion(), EngineVersion.CURRENT));
        }

        private Optional<Finding> content(DecisionRecord record) {
            List<Difference> differences = new ArrayList<>();
            try {
                if (recomputation == null) {
                    recomputation = Recomputation.of(record);
                    checkPlan(record, differences);
                }
                Recomputation.Result result = recomputation.next(record);
                for (Objection objection : result.objections()) {
                    differences.add(new Difference(objection.field(), objection.found(), objection.expected()));
                }
                if (result.record().isPresent()) {
                    differences.addAll(
                            RecordDifferences.between(record, result.record().get()));
                } else if (differences.isEmpty()) {
                    differences.add(new Difference(
                            "occasion", record.occasion().code(), "no record: these counts lead to no decision"));
                }
            } catch (IllegalArgumentException | ArithmeticException e) {
                differences.add(new Difference("record", "figures that no decision can be made from", e.getMessage()));
            }
            return differences.isEmpty()
                    ? Optional.empty()
                    : Optional.of(new Finding(
                            record.experiment(),
                            record.sequence(),
                            Finding.Kind.CONTENT,
                            "the record is not what its own counts lead to",
                            DISTRUST,
                            differences));
        }

        private static void checkPlan(DecisionRecord record, List<Difference> differences) {
            String digest = PlanDigest.of(record.plan());
            if (!digest.equals(record.planDigest())) {
                differences.add(new Difference("planDigest", record.planDigest(), digest));
            }
            if (!record.plan().experiment().equals(record.experiment())) {
                differences.add(new Difference("plan.experiment", record.plan().experiment(), record.experiment()));
            }
        }

        private static Optional<Finding> found(
                DecisionRecord record, Finding.Kind kind, String sentence, String action, Difference... differences) {
            return Optional.of(
                    new Finding(record.experiment(), record.sequence(), kind, sentence, action, List.of(differences)));
        }
    }
}
