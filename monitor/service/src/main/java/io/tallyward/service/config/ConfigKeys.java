package io.tallyward.service.config;

import static io.tallyward.service.config.document.ScalarType.duration;
import static io.tallyward.service.config.document.ScalarType.flag;
import static io.tallyward.service.config.document.ScalarType.matching;
import static io.tallyward.service.config.document.ScalarType.text;
import static io.tallyward.service.config.document.ScalarType.wholeNumber;

import io.tallyward.connector.format.EventField;
import io.tallyward.connector.kafka.GroupProtocol;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.ListType;
import io.tallyward.service.config.document.MapType;
import io.tallyward.service.config.document.ScalarType;
import io.tallyward.service.config.document.Shape;
import io.tallyward.service.config.document.Values;
import java.time.Duration;
import java.util.Collections;
import java.util.EnumMap;
import java.util.List;
import java.util.Map;
import java.util.Optional;

/** Every key of the configuration file: its name, type, default and meaning. */
public final class ConfigKeys {

    static final class Kafka {
        static final Key<String> BOOTSTRAP_SERVERS = Key.required(
                "bootstrap-servers",
                matching("[^\\s,]+:\\d{1,5}(,[^\\s,]+:\\d{1,5})*", "host:port, several separated by commas"),
                "Brokers to connect to first.");
        static final Key<Map<String, String>> PROPERTIES = Key.optional(
                "properties",
                new MapType<>(
                        matching("[A-Za-z0-9._-]{1,200}", "the name of a client property"),
                        new ScalarType<>("text", Optional::of),
                        0,
                        200,
                        "client properties"),
                "Any property of the Kafka clients, passed through; values are never printed.");
        static final Key<GroupProtocol> GROUP_PROTOCOL = Key.withDefault(
                "group-protocol",
                new ScalarType<>("classic or consumer", ConfigKeys::parseProtocol),
                "classic",
                "How instances share the partitions: classic, or consumer (KIP-848, brokers from 4.0); the same everywhere.");
        static final Key<String> INSTANCE = Key.optional(
                "instance",
                matching("[A-Za-z0-9._-]{1,200}", "letters, digits, dots, underscores and hyphens"),
                "Name that this instance alone has and keeps: restarted after a kill, it takes its partitions back at once.");
        static final Shape SHAPE = Shape.of(BOOTSTRAP_SERVERS, GROUP_PROTOCOL, INSTANCE, PROPERTIES);
    }

    static final class Fields {
        /** The key of each field, in the order to document them. */
        static final Map<EventField, Key<String>> BY_FIELD = pointers();

        static final Shape SHAPE = new Shape(List.copyOf(BY_FIELD.values()));

        private static final int MAX_LENGTH = 256;

        private static Map<EventField, Key<String>> pointers() {
            Map<EventField, Key<String>> keys = new EnumMap<>(EventField.class);
            for (EventField field : EventField.values()) {
                String pointer = "/" + field.code();
                ScalarType<String> type = matching(
                        "(?=.{1," + MAX_LENGTH + "}$)(/([^~/]|~[01])*){1,16}",
                        "JSON Pointer (RFC 6901) such as " + pointer);
                keys.put(field, Key.withDefault(field.code(), type, pointer, doc(field)));
            }
            return Collections.unmodifiableMap(keys);
        }

        private static String doc(EventField field) {
            return switch (field) {
                case KIND -> "What happened; see input.kinds.";
                case EXPERIMENT -> "Name of the experiment.";
                case VARIANT -> "Name of the variant.";
                case UNIT -> "Identifier of the randomised unit.";
                case ID -> "Identifier of the event within its source.";
                case AT -> "Event time: RFC 3339 text or milliseconds since the epoch.";
                case SOURCE -> "Emitter of the event; records may lack it.";
                case VIEW -> "Id of the view that was clicked; records may lack it.";
                case SEGMENTS -> "Object of low-cardinality fields; records may lack it.";
                case RECEIVED -> "When the pipeline received the event; read by a file replay only.";
            };
        }
    }

    static final class Kinds {
        static final Key<List<String>> VIEW = values("view", "Texts of the kind field that mean a view.");
        static final Key<List<String>> CLICK = values("click", "Texts of the kind field that mean a click.");
        static final Shape SHAPE = Shape.of(VIEW, CLICK);

        private static Key<List<String>> values(String name, String doc) {
            return Key.withDefaultItem(name, new ListType<>(text(200), 1, 16, "texts"), name, doc);
        }
    }

    static final class Input {
        static final Key<List<String>> TOPICS = Key.required(
                "topics",
                new ListType<>(
                        matching(
                                "(?!\\.{1,2}$)[A-Za-z0-9._-]{1,249}",
                                "topic name of at most 249 letters, digits, dots, underscores and hyphens"),
                        1,
                        100,
                        "topics"),
                "Topics that carry the events; all have the same number of partitions.");
        static final Key<InputStart> START = Key.withDefault(
                "start",
                new ScalarType<>(
                        "earliest, latest or an RFC 3339 time such as 2026-05-04T00:00:00Z", ConfigKeys::parseStart),
                "earliest",
                "Where to begin in partitions without a committed offset.");
        static final Key<Values> FIELDS =
                Key.section("fields", Fields.SHAPE, "Where the fields of an event lie in a record (JSON Pointers).");
        static final Key<Values> KINDS =
                Key.section("kinds", Kinds.SHAPE, "Which texts of the kind field mean which kind of event.");
        static final Key<Duration> MAX_SKEW = Key.withDefault(
                "max-skew",
                duration(Duration.ZERO, Duration.ofDays(1)),
                "PT5M",
                "How far an event may lie ahead of its record's timestamp.");
        static final Key<Duration> IDLE_AFTER = Key.withDefault(
                "idle-after",
                duration(Duration.ofSeconds(1), Duration.ofDays(1)),
                "PT5M",
                "How long a partition may be silent before the others stop waiting for it.");
        static final Key<Integer> MAX_EVENT_BYTES = Key.withDefault(
                "max-event-bytes", wholeNumber(1_000, 10_000_000), "65536", "Larger records are rejected.");
        static final Shape SHAPE = Shape.of(TOPICS, START, FIELDS, KINDS, MAX_SKEW, IDLE_AFTER, MAX_EVENT_BYTES);
    }

    static final class Http {
        static final Key<String> HOST = Key.withDefault(
                "host",
                matching("[A-Za-z0-9.:%_-]{1,253}", "host name or IP address"),
                "127.0.0.1",
                "Address to listen on; the default is reachable from this machine only.");
        static final Key<Integer> PORT = Key.withDefault(
                "port", wholeNumber(0, 65_535), "8087", "Port to listen on; 0 lets the system choose a free one.");
        static final Shape SHAPE = Shape.of(HOST, PORT);
    }

    static final class Webhook {
        static final Key<String> URL = Key.required(
                "url", new ScalarType<>("https address", Optional::of), "Where to post notices (Standard Webhooks).");
        static final Key<String> SECRET_FILE = Key.optional(
                "secret-file", text(4_096), "File that holds the signing secret, relative to the configuration file.");
        static final Key<String> SECRET_ENVIRONMENT =
                Key.optional("secret-environment", text(200), "Environment variable that holds the signing secret.");
        static final Key<Boolean> ALLOW_HTTP =
                Key.withDefault("allow-http", flag(), "false", "Accept an address without TLS.");
        static final Key<Boolean> ALLOW_PRIVATE =
                Key.withDefault("allow-private", flag(), "false", "Accept an address in a private network.");
        static final Key<String> RUNBOOK =
                Key.optional("runbook", text(1_000), "Address of the runbook; notices link to their section of it.");
        static final Key<String> PAGES = Key.optional(
                "pages",
                text(900),
                "Address of the experiments' pages as seen by those who are told, if not the one they are served at.");
        static final Shape SHAPE =
                Shape.of(URL, SECRET_FILE, SECRET_ENVIRONMENT, ALLOW_HTTP, ALLOW_PRIVATE, RUNBOOK, PAGES);
    }

    static final class UnitKey {
        static final Key<String> FILE =
                Key.optional("file", text(4_096), "File that holds the key, relative to the configuration file.");
        static final Key<String> ENVIRONMENT =
                Key.optional("environment", text(200), "Environment variable that holds the key.");
        static final Shape SHAPE = Shape.of(FILE, ENVIRONMENT);
    }

    static final Key<String> NAME =
            Key.withDefault("name", ScalarType.name(), "tallyward", "Prefix of consumer groups and internal topics.");
    static final Key<Values> KAFKA = Key.section("kafka", Kafka.SHAPE, "How to reach the brokers.");
    static final Key<Values> INPUT = Key.section("input", Input.SHAPE, "What to read and how to understand it.");
    static final Key<String> PLANS = Key.withDefault(
            "plans", text(4_096), "plans", "Directory of the plan files, relative to the configuration file.");
    static final Key<Duration> COMMIT_INTERVAL = Key.withDefault(
            "commit-interval",
            duration(Duration.ofMillis(50), Duration.ofMinutes(1)),
            "PT1S",
            "How long effects are gathered before they are committed together.");
    static final Key<Integer> WORKERS =
            Key.withDefault("workers", wholeNumber(1, 64), "2", "Threads that count and decide.");
    static final Key<Values> HTTP = Key.section("http", Http.SHAPE, "Where metrics, health, page and API are served.");
    static final Key<Values> WEBHOOK = Key.optional("webhook", Webhook.SHAPE, "Whom to tell; nobody without it.");
    static final Key<Values> UNIT_KEY =
            Key.optional("unit-key", UnitKey.SHAPE, "Key of the hash that stands for a unit.");

    /** The shape of the whole file. */
    public static final Shape SHAPE =
            Shape.of(NAME, KAFKA, INPUT, PLANS, COMMIT_INTERVAL, WORKERS, HTTP, WEBHOOK, UNIT_KEY);

    private ConfigKeys() {}

    private static Optional<GroupProtocol> parseProtocol(String text) {
        return switch (text) {
            case "classic" -> Optional.of(GroupProtocol.CLASSIC);
            case "consumer" -> Optional.of(GroupProtocol.CONSUMER);
            default -> Optional.empty();
        };
    }

    private static Optional<InputStart> parseStart(String text) {
        return switch (text) {
            case "earliest" -> Optional.of(new InputStart.Earliest());
            case "latest" -> Optional.of(new InputStart.Latest());
            default -> ScalarType.parseInstant(text).map(InputStart.At::new);
        };
    }
}
