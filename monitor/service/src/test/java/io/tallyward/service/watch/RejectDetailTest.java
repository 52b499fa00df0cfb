package io.tallyward.service.watch;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.engine.event.Event;
import io.tallyward.engine.event.EventKind;
import io.tallyward.engine.event.RejectReason;
import java.util.Map;
import org.junit.jupiter.api.Test;

class RejectDetailTest {

    private static Event event(String experiment, String variant) {
        return new Event(EventKind.VIEW, experiment, variant, "visitor-7", "web", "e1", 60_000, "", Map.of());
    }

    @Test
    void quotesWhatComesFromOutside() {
        assertEquals(
                "no plan is named \"quay\\u000aERROR all is lost\"",
                RejectDetail.of(RejectReason.UNKNOWN_EXPERIMENT, event("quay\nERROR all is lost", "wide"), 0));
        assertEquals(
                "the plan of quay-banner has no variant \"tall\"",
                RejectDetail.of(RejectReason.UNKNOWN_VARIANT, event("quay-banner", "tall"), 0));
    }

    @Test
    void neverNamesTheUnit() {
        assertEquals(
                "no plan is named a value like the unit",
                RejectDetail.of(RejectReason.UNKNOWN_EXPERIMENT, event("visitor-7", "wide"), 0));
        assertEquals(
                "the plan of quay-banner has no variant a value like the unit",
                RejectDetail.of(RejectReason.UNKNOWN_VARIANT, event("quay-banner", "of visitor-7"), 0));
    }

    @Test
    void tellsBothTimesOfABadOne() {
        assertEquals(
                "event time 1970-01-01T00:01:00Z lies ahead of the record's timestamp 1970-01-01T00:00:00Z"
                        + " by more than input.max-skew",
                RejectDetail.of(RejectReason.BAD_TIME, event("quay-banner", "wide"), 0));
    }
}
