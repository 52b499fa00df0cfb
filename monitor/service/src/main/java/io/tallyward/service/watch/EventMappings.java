package io.tallyward.service.watch;

import io.tallyward.connector.format.EventField;
import io.tallyward.connector.format.EventMapping;
import io.tallyward.engine.event.EventKind;
import io.tallyward.service.config.FieldPointers;
import io.tallyward.service.config.InputConfig;
import java.util.EnumMap;
import java.util.HashMap;
import java.util.Map;

/** Turns the input section of the configuration into the mapping that reads events. */
final class EventMappings {

    private EventMappings() {}

    static EventMapping of(InputConfig input) {
        FieldPointers fields = input.fields();
        Map<EventField, String> pointers = new EnumMap<>(EventField.class);
        pointers.put(EventField.KIND, fields.kind());
        pointers.put(EventField.EXPERIMENT, fields.experiment());
        pointers.put(EventField.VARIANT, fields.variant());
        pointers.put(EventField.UNIT, fields.unit());
        pointers.put(EventField.ID, fields.id());
        pointers.put(EventField.AT, fields.at());
        pointers.put(EventField.SOURCE, fields.source());
        pointers.put(EventField.VIEW, fields.view());
        pointers.put(EventField.SEGMENTS, fields.segments());
        Map<String, EventKind> kinds = new HashMap<>();
        input.kinds().forEach((kind, values) -> values.forEach(value -> kinds.put(value, kind)));
        return new EventMapping(pointers, kinds);
    }
}
