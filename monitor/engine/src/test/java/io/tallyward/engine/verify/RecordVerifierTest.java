package io.tallyward.engine.verify;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.record.DecisionRecord;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Occasion;
import io.tallyward.engine.record.Trust;
import io.tallyward.engine.record.Verdict;
import io.tallyward.engine.verify.Finding.Kind;
import java.util.ArrayList;
import java.util.Collections;
import java.util.EnumSet;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Random;
import java.util.Set;
import java.util.TreeSet;
import org.junit.jupiter.api.Test;

class RecordVerifierTest {

    private static final Map<String, List<DecisionRecord>> RUNS = RecordedRuns.all();

    private static Optional<Finding> verified(List<DecisionRecord> records) {
        RecordVerifier verifier = new RecordVerifier();
        Optional<Finding> first = Optional.empty();
        for (DecisionRecord record : records) {
            Optional<Finding> finding = verifier.take(record);
            first = first.or(() -> finding);
        }
        return first;
    }

    private static Finding finding(List<DecisionRecord> records) {
        return verified(records).orElseThrow();
    }

    @Test
    void findsNothingInLogsAsTheyWereWritten() {
        RUNS.forEach((shape, records) -> assertEquals(Optional.empty(), verified(records), shape));
    }

    @Test
    void isTriedOnEverythingARecordCanSay() {
        Set<Occasion> occasions = EnumSet.noneOf(Occasion.class);
        Set<Trust> trusts = EnumSet.noneOf(Trust.class);
        Set<Verdict> verdicts = EnumSet.noneOf(Verdict.class);
        Set<String> parts = new TreeSet<>();
        for (List<DecisionRecord> records : RUNS.values()) {
            for (DecisionRecord record : records) {
                occasions.add(record.occasion());
                trusts.add(record.trust());
                for (Comparison look : record.comparisons()) {
                    verdicts.add(look.verdict());
                    parts.add(look.held() == null ? "not held" : "held");
                    parts.add(look.adjusted() == null ? "open" : "adjusted");
                    parts.add(look.clustering() == null ? "by unit" : "by view");
                }
                parts.add(record.split().peak() == null ? "even" : "peak");
                parts.add(record.split().origin() == null ? "no origin" : "origin");
            }
        }
        assertEquals(EnumSet.allOf(Occasion.class), occasions);
        assertEquals(EnumSet.allOf(Trust.class), trusts);
        assertTrue(
                verdicts.containsAll(Set.of(
                        Verdict.CONTINUE,
                        Verdict.STOP_BENEFIT,
                        Verdict.STOP_HARM,
                        Verdict.STOP_FUTILITY,
                        Verdict.EXHAUSTED)),
                verdicts::toString);
        assertEquals(10, parts.size(), parts::toString);
    }

    @Test
    void findsNothingHoweverExperimentsAreMixed() {
        for (int seed = 0; seed < 20; seed++) {
            List<List<DecisionRecord>> rest = new ArrayList<>();
            RUNS.values().forEach(records -> rest.add(new ArrayList<>(records)));
            Random random = new Random(seed);
            List<DecisionRecord> mixed = new ArrayList<>();
            while (!rest.isEmpty()) {
                List<DecisionRecord> next = rest.get(random.nextInt(rest.size()));
                mixed.add(next.remove(0));
                rest.removeIf(List::isEmpty);
            }
            assertEquals(Optional.empty(), verified(mixed), "seed " + seed);
        }
    }

    private static List<DecisionRecord> benefit() {
        return new ArrayList<>(RUNS.get("benefit"));
    }

    @Test
    void saysWhatIsMissing() {
        List<DecisionRecord> headless = benefit();
        headless.remove(0);
        assertEquals(Kind.NO_BEGINNING, finding(headless).kind());
        assertEquals(
                "the log begins with record 2: the plan, and what was decided before, are missing",
                finding(headless).sentence());
        List<DecisionRecord> holed = benefit();
        holed.remove(2);
        assertEquals(Kind.GAP, finding(holed).kind());
        assertEquals(
                "record 2 is followed by record 4: 1 missing in between",
                finding(holed).sentence());
    }

    @Test
    void saysWhatIsThereTwice() {
        List<DecisionRecord> doubled = benefit();
        doubled.add(2, doubled.get(1));
        assertEquals(Kind.REPEATED, finding(doubled).kind());
        List<DecisionRecord> forked = benefit();
        DecisionRecord second = forked.get(1);
        forked.add(2, Forgery.sealed(second.chained("0".repeat(64), "")));
        assertEquals(Kind.TWO_CHAINS, finding(forked).kind());
        assertEquals(
                "after record 2 comes another record 2: these are two chains",
                finding(forked).sentence());
    }

    @Test
    void tellsAnExchangedOrderFromAChange() {
        List<DecisionRecord> exchanged = benefit();
        Collections.swap(exchanged, 1, 2);
        assertEquals(Kind.GAP, finding(exchanged).kind());
        List<DecisionRecord> unlinked = benefit();
        unlinked.set(1, Forgery.sealed(unlinked.get(1).chained("0".repeat(64), "")));
        assertEquals(Kind.LINK, finding(unlinked).kind());
    }

    @Test
    void namesTheFieldWithWhatWasRecordedAndWhatTheCountsLeadTo() {
        List<DecisionRecord> records = benefit();
        DecisionRecord third = Forgery.changed(records.get(2), "comparisons[0].z more");
        double z = records.get(2).comparisons().get(0).z();
        Finding finding = finding(Forgery.chained(Forgery.with(records, 2, third)));
        assertEquals(Kind.CONTENT, finding.kind());
        assertEquals(3, finding.sequence());
        assertEquals(
                List.of(new Difference("comparisons[0].z", String.valueOf(Math.nextUp(z)), String.valueOf(z))),
                finding.differences());
    }

    @Test
    void goesOnWithOtherExperimentsAfterAFinding() {
        List<DecisionRecord> holed = benefit();
        holed.remove(2);
        RecordVerifier verifier = new RecordVerifier();
        holed.forEach(verifier::take);
        RUNS.get("views").forEach(record -> assertEquals(Optional.empty(), verifier.take(record)));
        assertEquals(2, verifier.standings().get("quay-banner").verified());
        assertEquals(holed.size(), verifier.standings().get("quay-banner").records());
        assertEquals(
                RUNS.get("views").size(),
                verifier.standings().get("cabin-upsell").verified());
    }
}
