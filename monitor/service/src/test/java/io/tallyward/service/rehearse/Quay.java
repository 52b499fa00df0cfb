package io.tallyward.service.rehearse;

import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.BadInputException;
import io.tallyward.service.plan.PlanReader;
import java.util.OptionalLong;

/** Plans of the invented ferry operator, and rehearsals of them. */
final class Quay {

    /** Ten looks, one every two days, of two variants. */
    static final String TEN_LOOKS = """
            experiment: quay-banner
            question: does the wide quay photo bring more timetable clicks?
            owner: web-growth@northwater.example
            variants: {plain: {share: 0.5, control: true}, wide: {share: 0.5}}
            test: {alpha: 0.05, sides: two, power: 0.8, baseline: 0.12, smallest-effect: 0.03}
            looks: {every: P2D}
            run: {from: 2026-05-04T00:00:00Z, at-most: P20D}
            """;

    /** The same with four arms of unequal shares. */
    static final String FOUR_ARMS =
            TEN_LOOKS.replace("wide: {share: 0.5}", "wide: {share: 0.2}, tall: {share: 0.2}, dusk: {share: 0.1}");

    private Quay() {}

    static Plan plan(String text) {
        try {
            return PlanReader.parse("plan", text).orElseThrow();
        } catch (BadInputException e) {
            throw new AssertionError(e);
        }
    }

    /** A request without estimates. */
    static RehearsalRequest request(long runs, double... rates) {
        return new RehearsalRequest(runs, 20_260_504, rates, OptionalLong.empty(), false, false, 2);
    }

    static RehearsalReport rehearsed(String text, RehearsalRequest request) {
        try {
            return new Rehearsal(plan(text), request).run(done -> {});
        } catch (InterruptedException e) {
            throw new AssertionError(e);
        }
    }
}
