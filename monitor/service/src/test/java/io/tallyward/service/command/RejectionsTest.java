package io.tallyward.service.command;

import static org.junit.jupiter.api.Assertions.assertEquals;

import io.tallyward.engine.event.RejectReason;
import io.tallyward.service.config.document.Problem;
import java.util.List;
import org.junit.jupiter.api.Test;

class RejectionsTest {

    private static final String FILE = "bad.jsonl";

    private final Rejections rejections = new Rejections();

    @Test
    void tellsEveryKindOfProblem() {
        rejections.add(RejectReason.MISSING_FIELD, new Rejections.Origin(FILE, 3), "kind at /kind: missing");
        rejections.add(RejectReason.BAD_TIME, new Rejections.Origin(FILE, 4), "at at /at: \"yesterday\"");
        rejections.add(RejectReason.MISSING_FIELD, new Rejections.Origin(FILE, 5), "kind at /kind: \"hover\"");
        rejections.add(RejectReason.MISSING_FIELD, new Rejections.Origin(FILE, 6), "kind at /kind: missing");
        assertEquals(
                List.of(
                        "bad.jsonl:3: missing-field: kind at /kind: missing (2 of this kind)",
                        "bad.jsonl:4: bad-time: at at /at: \"yesterday\" (1 of this kind)",
                        "bad.jsonl:5: missing-field: kind at /kind: \"hover\" (1 of this kind)"),
                messages());
        assertEquals(3, rejections.counts().get(RejectReason.MISSING_FIELD));
    }

    @Test
    void onlyCountsWhatGoesOnAndOn() {
        for (int line = 1; line <= 100; line++) {
            rejections.add(RejectReason.BAD_TIME, new Rejections.Origin(FILE, line), "detail " + Math.min(line, 60));
        }
        assertEquals(6, messages().size());
        assertEquals(
                "bad.jsonl:5: bad-time: detail 5 (1 of this kind)", messages().get(4));
        assertEquals(
                "bad.jsonl: bad-time: 95 more, for other details than these",
                messages().get(5));
    }

    private List<String> messages() {
        return rejections.problems(FILE).stream().map(Problem::message).toList();
    }
}
