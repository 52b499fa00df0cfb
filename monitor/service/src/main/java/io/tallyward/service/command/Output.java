package io.tallyward.service.command;

import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.databind.json.JsonMapper;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.service.config.document.Problem;
import java.io.PrintWriter;
import java.util.List;

/**
 * Where a command writes: results to one stream, problems and remarks to the other. With JSON the problems go to the first
 * as well.
 */
final class Output {

    private static final JsonMapper JSON = new JsonMapper();

    private final PrintWriter out;
    private final PrintWriter err;
    private final boolean json;

    Output(PrintWriter out, PrintWriter err, boolean json) {
        this.out = out;
        this.err = err;
        this.json = json;
    }

    /** Whether a machine reads the output. */
    boolean json() {
        return json;
    }

    /** A JSON object to be written by {@link #line(ObjectNode)}; its first member is its type. */
    static ObjectNode typed(String type) {
        return object().put("type", type);
    }

    static ObjectNode object() {
        return JSON.createObjectNode();
    }

    /** Writes one JSON object on one line. */
    void line(ObjectNode object) {
        try {
            line(JSON.writeValueAsString(object));
        } catch (JsonProcessingException e) {
            throw new IllegalStateException("a JSON tree could not be written", e);
        }
    }

    /** Writes one line of text. */
    void line(String text) {
        out.println(text);
        out.flush();
    }

    /** Writes every problem: sentences for people, one object each for machines. */
    void problems(List<Problem> problems) {
        for (Problem problem : problems) {
            if (json) {
                line(typed("problem")
                        .put("where", problem.where())
                        .put("key", problem.key())
                        .put("found", problem.found())
                        .put("expected", problem.expected())
                        .put("remedy", problem.remedy())
                        .put("message", problem.message()));
            } else {
                err.println(problem.message());
            }
        }
        err.flush();
    }

    /** Writes a problem that is one sentence. */
    void problem(String sentence) {
        if (json) {
            line(typed("problem").put("message", sentence));
        } else {
            err.println(sentence);
            err.flush();
        }
    }
}
