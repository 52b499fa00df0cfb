package io.tallyward.engine.plan;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertInstanceOf;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.PlanBook.Ruling;
import java.time.Duration;
import java.time.Instant;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;
import java.util.Random;
import java.util.stream.IntStream;
import org.junit.jupiter.api.Test;

class PlanBookTest {

    private static final Instant DAY_1 = Plans.FROM.plus(Duration.ofDays(1));
    private static final Instant DAY_2 = Plans.FROM.plus(Duration.ofDays(2));
    private static final Instant DAY_3 = Plans.FROM.plus(Duration.ofDays(3));

    private final PlanBook book = new PlanBook();
    private final Plan plan = Plans.plan("quay-banner").build();

    private static Amendment stop(Instant at) {
        return new Amendment(at, "the ferry is in the dock", new Amendment.Stop());
    }

    private static Amendment shares(Instant at) {
        return new Amendment(at, "ramp", new Amendment.Shares(Map.of("plain", 0.2, "wide", 0.8)));
    }

    @Test
    void theLatestProposalStandsUntilItIsFrozen() {
        Plan other = Plans.plan("quay-banner").alpha(0.01).build();

        assertInstanceOf(Ruling.Adopted.class, book.propose(plan, Plans.FROM));
        assertInstanceOf(Ruling.Adopted.class, book.propose(other, Plans.FROM));
        assertInstanceOf(Ruling.Unchanged.class, book.propose(other, Plans.FROM));
        assertEquals(new PlanBook.Entry(other, false), book.entries().get("quay-banner"));

        book.freeze("quay-banner");

        assertEquals(new PlanBook.Entry(other, true), book.entries().get("quay-banner"));
        assertInstanceOf(Ruling.Refused.class, book.propose(plan, Plans.FROM));
        assertEquals(new PlanBook.Entry(other, true), book.entries().get("quay-banner"));
        assertTrue(book.refusal(plan).isPresent());
        assertFalse(book.refusal(other).isPresent());
    }

    @Test
    void aRefusalNamesTheKeyAndBothValues() {
        book.propose(plan, Plans.FROM);
        book.freeze("quay-banner");

        Ruling ruling = book.propose(Plans.plan("quay-banner").power(0.9).build(), Plans.FROM);

        assertEquals(new Ruling.Refused("test.power is 0.8, not 0.9"), ruling);
    }

    @Test
    void amendmentsAreTakenFromAMomentThatCannotBeCountedYet() {
        book.propose(plan, Plans.FROM);
        book.freeze("quay-banner");

        Plan amended = plan.amended(List.of(shares(DAY_1)));
        assertInstanceOf(Ruling.Refused.class, book.rule(amended, DAY_1.plusMillis(1)));
        assertEquals(new Ruling.Amended(List.of(shares(DAY_1))), book.propose(amended, DAY_1));
        assertEquals(new PlanBook.Entry(amended, true), book.entries().get("quay-banner"));

        Plan dropped = plan.amended(List.of(stop(DAY_2)));
        assertInstanceOf(Ruling.Refused.class, book.propose(dropped, DAY_1));
        assertInstanceOf(Ruling.Refused.class, book.propose(plan, DAY_1), "an amendment does not go away");

        Plan stopped = plan.amended(List.of(shares(DAY_1), stop(DAY_2)));
        assertEquals(new Ruling.Amended(List.of(stop(DAY_2))), book.propose(stopped, DAY_2));
        Plan afterwards = plan.amended(List.of(shares(DAY_1), stop(DAY_2), shares(DAY_3)));
        assertInstanceOf(Ruling.Refused.class, book.propose(afterwards, DAY_2), "a stop is final");
    }

    @Test
    void refusalsAreNumberedAndTheOldestForgotten() {
        book.propose(plan, Plans.FROM);
        book.freeze("quay-banner");
        IntStream.rangeClosed(1, 250)
                .forEach(i -> book.propose(
                        Plans.plan("quay-banner").power(0.8 + i / 10_000.0).build(), Plans.FROM));

        List<PlanBook.Refusal> refusals = book.refusals().get("quay-banner");

        assertEquals(100, refusals.size());
        assertEquals(151, refusals.get(0).number());
        assertEquals(250, refusals.get(99).number());
    }

    @Test
    void freezingWhatNobodyProposedIsOfNoConsequence() {
        book.freeze("quay-banner");
        assertInstanceOf(Ruling.Adopted.class, book.propose(plan, Plans.FROM));
        assertFalse(book.entries().get("quay-banner").frozen());
    }

    @Test
    void noMorePlansAreTakenThanEveryInstanceCanKeep() {
        for (int i = 0; i < PlanBook.MOST_EXPERIMENTS; i++) {
            book.propose(Plans.plan("quay-" + i).build(), Plans.FROM);
        }
        assertInstanceOf(Ruling.Refused.class, book.propose(plan, Plans.FROM));
        assertInstanceOf(
                Ruling.Adopted.class,
                book.propose(Plans.plan("quay-0").alpha(0.01).build(), Plans.FROM));
    }

    /** However instances' proposals and freezes interleave, a frozen plan never changes and amendments only grow. */
    @Test
    void whatIsFrozenStays() {
        Random random = new Random(20261201);
        for (int run = 0; run < 200; run++) {
            PlanBook any = new PlanBook();
            Plan frozen = null;
            List<Amendment> amendments = List.of();
            for (int step = 0; step < 60; step++) {
                if (random.nextInt(6) == 0) {
                    any.freeze("quay-banner");
                } else {
                    any.propose(proposal(random), Plans.FROM.plus(Duration.ofHours(random.nextInt(100))));
                }
                PlanBook.Entry entry = any.entries().get("quay-banner");
                if (frozen != null) {
                    assertTrue(entry.frozen());
                    assertEquals(PlanDigest.of(frozen), PlanDigest.of(entry.plan()));
                    assertEquals(
                            amendments,
                            entry.plan().amendments().subList(0, amendments.size()),
                            "amendments only grow");
                    assertTrue(AmendmentRules.problem(entry.plan()).isEmpty());
                }
                if (entry != null && entry.frozen()) {
                    frozen = entry.plan();
                    amendments = entry.plan().amendments();
                }
            }
        }
    }

    private static Plan proposal(Random random) {
        Plan base = Plans.plan("quay-banner")
                .alpha(random.nextInt(8) == 0 ? 0.01 : 0.05)
                .build();
        List<Amendment> amendments = new ArrayList<>();
        for (int i = random.nextInt(4); i > 0; i--) {
            Instant at = Plans.FROM.plus(Duration.ofHours(random.nextInt(100)));
            amendments.add(random.nextInt(5) == 0 ? stop(at) : shares(at));
        }
        return base.amended(amendments);
    }
}
