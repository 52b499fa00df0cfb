package io.tallyward.demo.stream;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertThrows;
import static org.junit.jupiter.api.Assertions.assertTrue;

import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import io.tallyward.demo.story.Flaw;
import io.tallyward.demo.story.StreamEvent;
import io.tallyward.demo.story.ToldScenario;
import java.io.IOException;
import java.time.Instant;
import java.util.function.Predicate;
import org.junit.jupiter.api.Test;

class EventJsonTest {

    private final ObjectMapper json = new ObjectMapper();

    @Test
    void saysWhatTheEventSays() throws IOException {
        StreamEvent click = first(event -> !event.isView() && event.viewId() != 0);
        JsonNode node = json.readTree(EventJson.record(click));
        assertEquals("click", node.at("/kind").asText());
        assertEquals(click.subject().experiment(), node.at("/experiment").asText());
        assertEquals(click.subject().variant(), node.at("/variant").asText());
        assertEquals(click.subject().unit(), node.at("/unit").asText());
        assertEquals(click.atMillis(), Instant.parse(node.at("/at").asText()).toEpochMilli());
        assertEquals(16, node.at("/id").asText().length());
        assertEquals(16, node.at("/view").asText().length());
        assertEquals(
                click.subject().device().version(), node.at("/segments/version").asText());
        assertTrue(node.at("/received").isMissingNode());
    }

    @Test
    void fileLineCarriesTheArrival() throws IOException {
        StreamEvent view = first(StreamEvent::isView);
        JsonNode node = json.readTree(EventJson.line(view));
        assertEquals(
                view.receivedMillis(),
                Instant.parse(node.at("/received").asText()).toEpochMilli());
        assertFalse(EventJson.line(view).contains("\n"));
    }

    @Test
    void flawsAreVisible() throws IOException {
        assertThrows(JsonProcessingException.class, () -> json.readTree(new String(flawed(Flaw.CUT_OFF))));
        assertTrue(json.readTree(flawed(Flaw.NO_UNIT)).at("/unit").isMissingNode());
        assertTrue(flawed(Flaw.TOO_LARGE).length > 65_536);
        assertEquals(
                "half past nine",
                json.readTree(flawed(Flaw.UNREADABLE_TIME)).at("/at").asText());
    }

    private static byte[] flawed(Flaw flaw) {
        return EventJson.record(first(event -> event.flaw() == flaw));
    }

    private static StreamEvent first(Predicate<StreamEvent> wanted) {
        return ToldScenario.withDefaultSeed().events().stream()
                .filter(wanted)
                .findFirst()
                .orElseThrow();
    }
}
