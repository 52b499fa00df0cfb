package io.tallyward.engine.decide;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertNotEquals;
import static org.junit.jupiter.api.Assertions.assertSame;

import io.tallyward.engine.Plans;
import io.tallyward.engine.plan.Plan;
import java.time.Duration;
import org.junit.jupiter.api.Test;

class DecisionMemoTest {

    private final DecisionMemo memo = new DecisionMemo(0);

    private PlanDesign design(Plan plan) {
        return memo.design(plan, plan.challengers().get(0));
    }

    @Test
    void sharesTheDesignOfExperimentsThatArePlannedAlike() {
        Plan quay = Plans.plan("quay-banner").build();
        Plan deck = Plans.plan("deck-map").build();
        assertSame(design(quay), design(deck));
        assertEquals(PlanDesign.of(deck, deck.challengers().get(0)), design(deck));
    }

    @Test
    void keepsDesignsOfOtherTermsApart() {
        Plan plan = Plans.plan("quay-banner").build();
        Plan longer = Plans.plan("quay-banner").atMost(Duration.ofDays(9)).build();
        assertNotEquals(design(plan), design(longer));
    }
}
