package io.tallyward.service.plan;

import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.core.util.DefaultIndenter;
import com.fasterxml.jackson.core.util.DefaultPrettyPrinter;
import com.fasterxml.jackson.databind.json.JsonMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.tallyward.service.config.document.Form;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.Node;
import io.tallyward.service.config.document.Range;
import io.tallyward.service.config.document.Shape;
import java.math.BigDecimal;

/**
 * The JSON Schema (2020-12) of plan files, made of {@link PlanKeys}, so that editors complete keys, show what they mean and mark
 * what cannot be right. It says what one value by itself can tell; rules between keys, and how long a duration may be, are for
 * the reader of plans. A number in quotes, which the reader takes, it refuses.
 */
public final class PlanSchema {

    private static final JsonMapper JSON = new JsonMapper();

    /** To the millisecond; Java's own reader takes no weeks, months or years. */
    private static final String DURATION = "P(?=\\d|T\\d)(\\d+D)?(T(?=\\d)(\\d+H)?(\\d+M)?(\\d+(\\.\\d{1,3})?S)?)?";

    private static final String MORE_THAN_NOTHING = "(?=.*[1-9])";

    private static final String MOMENT =
            "\\d{4}-\\d{2}-\\d{2}T\\d{2}:\\d{2}(:\\d{2}(\\.\\d{1,3})?)?(Z|[+-]\\d{2}:\\d{2})";

    private PlanSchema() {}

    /** The schema as JSON. */
    public static String text() {
        ObjectNode schema = JSON.createObjectNode()
                .put("$schema", "https://json-schema.org/draft/2020-12/schema")
                .put("$id", "urn:tallyward:schema:plan")
                .put("title", "Plan")
                .put("description", "What is decided before an experiment, one file each.");
        keys(schema, PlanKeys.SHAPE);
        try {
            return JSON.writer(new DefaultPrettyPrinter().withObjectIndenter(new DefaultIndenter("  ", "\n")))
                    .writeValueAsString(schema);
        } catch (JsonProcessingException e) {
            throw new IllegalStateException("a JSON tree could not be written", e);
        }
    }

    private static void describe(ObjectNode schema, Key<?> key) {
        boolean scalar = !(key.type().form() instanceof Form.Keys);
        schema.put(
                "description", scalar ? key.doc() + " Expected: " + key.type().expected() + "." : key.doc());
        put(schema, key.type().form());
        key.fallback()
                .filter(Node.Scalar.class::isInstance)
                .map(node -> ((Node.Scalar) node).text())
                .ifPresent(text -> putDefault(schema, key.type().form(), text));
    }

    private static void putDefault(ObjectNode schema, Form form, String text) {
        if (form instanceof Form.Numeric) {
            schema.put("default", new BigDecimal(text));
        } else if (form instanceof Form.Flag) {
            schema.put("default", Boolean.parseBoolean(text));
        } else {
            schema.put("default", text);
        }
    }

    private static ObjectNode of(Form form) {
        ObjectNode schema = JSON.createObjectNode();
        put(schema, form);
        return schema;
    }

    private static void put(ObjectNode schema, Form form) {
        if (form instanceof Form.Keys keys) {
            keys(schema, keys.shape());
        } else if (form instanceof Form.Entries entries) {
            schema.put("type", "object").put("minProperties", entries.min()).put("maxProperties", entries.max());
            schema.set("propertyNames", of(entries.name()));
            schema.set("additionalProperties", of(entries.value()));
        } else if (form instanceof Form.Items items) {
            schema.put("type", "array").put("minItems", items.min()).put("maxItems", items.max());
            schema.set("items", of(items.item()));
        } else if (form instanceof Form.Either either) {
            ArrayNode anyOf = schema.putArray("anyOf");
            either.forms().forEach(each -> anyOf.add(of(each)));
        } else {
            scalar(schema, form);
        }
    }

    private static void scalar(ObjectNode schema, Form form) {
        if (form instanceof Form.Numeric numeric) {
            schema.put("type", numeric.whole() ? "integer" : "number");
            range(schema, numeric.range());
        } else if (form instanceof Form.Flag) {
            schema.put("type", "boolean");
        } else if (form instanceof Form.Choice choice) {
            ArrayNode texts = schema.putArray("enum");
            choice.texts().forEach(texts::add);
        } else if (form instanceof Form.Text text) {
            pattern(schema, text.pattern());
            if (text.maxLength() < Integer.MAX_VALUE) {
                schema.put("maxLength", text.maxLength());
            }
        } else if (form instanceof Form.Length length) {
            pattern(schema, (length.positive() ? MORE_THAN_NOTHING : "") + DURATION);
        } else if (form instanceof Form.Moment) {
            pattern(schema, MOMENT);
        }
    }

    private static void pattern(ObjectNode schema, String pattern) {
        schema.put("type", "string").put("pattern", "^(" + pattern + ")$");
    }

    private static void range(ObjectNode schema, Range range) {
        schema.put(range.withLow() ? "minimum" : "exclusiveMinimum", plain(range.low()));
        schema.put(range.withHigh() ? "maximum" : "exclusiveMaximum", plain(range.high()));
    }

    private static BigDecimal plain(double value) {
        return BigDecimal.valueOf(value).stripTrailingZeros();
    }

    /** A section without required keys may be written and left empty, which YAML takes for null. */
    private static void keys(ObjectNode schema, Shape shape) {
        boolean optional = shape.keys().stream().noneMatch(Key::required)
                && shape.alternatives().isEmpty();
        if (optional) {
            schema.putArray("type").add("object").add("null");
        } else {
            schema.put("type", "object");
        }
        schema.put("additionalProperties", false);
        ArrayNode required = JSON.createArrayNode();
        shape.keys().stream().filter(Key::required).forEach(key -> required.add(key.name()));
        if (!required.isEmpty()) {
            schema.set("required", required);
        }
        ObjectNode properties = schema.putObject("properties");
        shape.keys().forEach(key -> describe(properties.putObject(key.name()), key));
        if (!shape.alternatives().isEmpty()) {
            ArrayNode oneOf = schema.putArray("oneOf");
            shape.alternatives()
                    .forEach(key -> oneOf.addObject().putArray("required").add(key.name()));
        }
    }
}
