package io.tallyward.service.config;

import io.tallyward.connector.format.EventField;
import io.tallyward.connector.format.EventMapping;
import io.tallyward.connector.kafka.GroupProtocol;
import io.tallyward.engine.event.EventKind;
import io.tallyward.service.config.document.Checked;
import io.tallyward.service.config.document.DocumentReader;
import io.tallyward.service.config.document.Key;
import io.tallyward.service.config.document.Node.Mapping;
import io.tallyward.service.config.document.Problems;
import io.tallyward.service.config.document.Values;
import java.net.URI;
import java.net.URISyntaxException;
import java.nio.file.Path;
import java.util.EnumMap;
import java.util.HashMap;
import java.util.HashSet;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.Set;

/** Reads the configuration file. */
public final class ConfigReader {

    /** Client properties that would break the exactly-once contract if somebody else set them. */
    private static final Set<String> RESERVED_PROPERTIES = Set.of(
            "bootstrap.servers",
            "group.id",
            "group.instance.id",
            "group.protocol",
            "group.remote.assignor",
            "partition.assignment.strategy",
            "client.id",
            "enable.auto.commit",
            "auto.offset.reset",
            "isolation.level",
            "transactional.id",
            "enable.idempotence",
            "acks",
            "key.serializer",
            "value.serializer",
            "key.deserializer",
            "value.deserializer");

    /** What the service appends to its name to name its own topics. */
    private static final List<String> INTERNAL_TOPICS =
            List.of("count-state", "tallies", "decide-state", "decisions", "notices", "rejects");

    private final Map<String, String> environment;

    /** A reader that looks up secrets in the given environment variables. */
    public ConfigReader(Map<String, String> environment) {
        this.environment = Map.copyOf(environment);
    }

    /** The configuration in a file, or everything that is wrong with it. */
    public Checked<ServiceConfig> read(Path file) {
        Problems problems = new Problems(file.toString());
        Optional<Mapping> root = new DocumentReader(problems).read(file);
        if (root.isEmpty()) {
            return Checked.refused(problems.list());
        }
        Values values = ConfigKeys.SHAPE.readRoot(root.get(), problems);
        Path directory = file.toAbsolutePath().normalize().getParent();
        values.find(ConfigKeys.KAFKA).ifPresent(ConfigReader::checkKafka);
        values.find(ConfigKeys.INPUT).ifPresent(input -> checkInput(values, input));
        SecretReader secrets = new SecretReader(directory, environment);
        Optional<Secret> unitKey = values.find(ConfigKeys.UNIT_KEY).flatMap(secrets::unitKey);
        Optional<WebhookConfig> webhook = values.find(ConfigKeys.WEBHOOK).flatMap(section -> webhook(section, secrets));
        return problems.isEmpty()
                ? Checked.of(config(file, directory, values, webhook, unitKey))
                : Checked.refused(problems.list());
    }

    private static ServiceConfig config(
            Path file, Path directory, Values values, Optional<WebhookConfig> webhook, Optional<Secret> unitKey) {
        Values kafka = values.get(ConfigKeys.KAFKA);
        Values http = values.get(ConfigKeys.HTTP);
        return new ServiceConfig(
                file,
                values.get(ConfigKeys.NAME),
                new KafkaConfig(
                        kafka.get(ConfigKeys.Kafka.BOOTSTRAP_SERVERS),
                        kafka.get(ConfigKeys.Kafka.GROUP_PROTOCOL),
                        kafka.find(ConfigKeys.Kafka.INSTANCE),
                        kafka.find(ConfigKeys.Kafka.PROPERTIES).orElse(Map.of())),
                input(values.get(ConfigKeys.INPUT)),
                directory.resolve(values.get(ConfigKeys.PLANS)).normalize(),
                values.get(ConfigKeys.COMMIT_INTERVAL),
                values.get(ConfigKeys.WORKERS),
                new HttpConfig(http.get(ConfigKeys.Http.HOST), http.get(ConfigKeys.Http.PORT)),
                webhook,
                unitKey);
    }

    private static InputConfig input(Values input) {
        return new InputConfig(
                input.get(ConfigKeys.Input.TOPICS),
                input.get(ConfigKeys.Input.START),
                new EventMapping(
                        pointers(input.get(ConfigKeys.Input.FIELDS)), kinds(input.get(ConfigKeys.Input.KINDS))),
                input.get(ConfigKeys.Input.MAX_SKEW),
                input.get(ConfigKeys.Input.IDLE_AFTER),
                input.get(ConfigKeys.Input.MAX_EVENT_BYTES));
    }

    private static Map<EventField, String> pointers(Values fields) {
        Map<EventField, String> pointers = new EnumMap<>(EventField.class);
        ConfigKeys.Fields.BY_FIELD.forEach(
                (field, key) -> fields.find(key).ifPresent(pointer -> pointers.put(field, pointer)));
        return pointers;
    }

    private static Map<String, EventKind> kinds(Values kinds) {
        Map<String, EventKind> meanings = new HashMap<>();
        kinds.get(ConfigKeys.Kinds.VIEW).forEach(text -> meanings.put(text, EventKind.VIEW));
        kinds.get(ConfigKeys.Kinds.CLICK).forEach(text -> meanings.put(text, EventKind.CLICK));
        return meanings;
    }

    private static void checkKafka(Values kafka) {
        kafka.find(ConfigKeys.Kafka.PROPERTIES).stream()
                .flatMap(properties -> properties.keySet().stream())
                .filter(RESERVED_PROPERTIES::contains)
                .sorted()
                .forEach(name -> kafka.refuse(
                        ConfigKeys.Kafka.PROPERTIES, name, "properties that the service does not set itself"));
        Optional<String> instance = kafka.find(ConfigKeys.Kafka.INSTANCE);
        if (instance.isPresent()
                && kafka.find(ConfigKeys.Kafka.GROUP_PROTOCOL).equals(Optional.of(GroupProtocol.CONSUMER))) {
            kafka.refuse(
                    ConfigKeys.Kafka.INSTANCE,
                    instance.get(),
                    "none with group-protocol: consumer, whose broker lets nobody take over before a session ends");
        }
    }

    private static void checkInput(Values values, Values input) {
        List<String> topics = input.find(ConfigKeys.Input.TOPICS).orElse(List.of());
        String prefix = values.find(ConfigKeys.NAME).orElse("") + "-";
        Set<String> seen = new HashSet<>();
        for (String topic : topics) {
            if (!seen.add(topic)) {
                input.refuse(ConfigKeys.Input.TOPICS, topic + " twice", "each topic once");
            }
            if (topic.startsWith(prefix) && INTERNAL_TOPICS.contains(topic.substring(prefix.length()))) {
                input.refuse(ConfigKeys.Input.TOPICS, topic, "topics that the service does not write itself");
            }
        }
        input.find(ConfigKeys.Input.KINDS).ifPresent(ConfigReader::checkKinds);
        input.find(ConfigKeys.Input.FIELDS).ifPresent(ConfigReader::checkFields);
    }

    /** Each pointer is sound by its type; what can still be wrong is that one lies inside another. */
    private static void checkFields(Values fields) {
        Map<EventField, String> pointers = pointers(fields);
        if (pointers.size() == EventField.values().length) {
            EventMapping.problems(pointers, EventMapping.DEFAULT.kinds())
                    .forEach(problem -> fields.refuse(problem, ""));
        }
    }

    private static void checkKinds(Values kinds) {
        Set<String> views = Set.copyOf(kinds.find(ConfigKeys.Kinds.VIEW).orElse(List.of()));
        for (String click : Set.copyOf(kinds.find(ConfigKeys.Kinds.CLICK).orElse(List.of()))) {
            if (views.contains(click)) {
                kinds.refuse(ConfigKeys.Kinds.CLICK, click, "texts that do not mean a view as well");
            }
        }
    }

    private static Optional<WebhookConfig> webhook(Values section, SecretReader secrets) {
        Optional<Secret> secret = secrets.signingSecret(section);
        boolean allowHttp = section.find(ConfigKeys.Webhook.ALLOW_HTTP).orElse(false);
        boolean allowPrivate = section.find(ConfigKeys.Webhook.ALLOW_PRIVATE).orElse(false);
        Optional<URI> url = section.find(ConfigKeys.Webhook.URL)
                .flatMap(text -> url(section, text, allowHttp))
                .filter(address -> allowPrivate || isPublic(section, address));
        return secret.flatMap(key -> url.map(address -> new WebhookConfig(
                address,
                key,
                allowHttp,
                allowPrivate,
                link(section, ConfigKeys.Webhook.RUNBOOK),
                link(section, ConfigKeys.Webhook.PAGES))));
    }

    private static Optional<URI> link(Values section, Key<String> key) {
        Optional<String> text = section.find(key);
        if (text.isEmpty()) {
            return Optional.empty();
        }
        try {
            URI link = new URI(text.get());
            if (link.getHost() != null && ("https".equals(link.getScheme()) || "http".equals(link.getScheme()))) {
                return Optional.of(link);
            }
        } catch (URISyntaxException e) {
            // Told below, like every other text that is no link.
        }
        section.refuse(key, text.get(), "http or https address such as https://wiki.northwater.example/tallyward");
        return Optional.empty();
    }

    /** Refuses without showing the address, whose path or query often is a password in disguise. */
    private static Optional<URI> url(Values section, String text, boolean allowHttp) {
        URI url;
        try {
            url = new URI(text);
        } catch (URISyntaxException e) {
            section.refuse(ConfigKeys.Webhook.URL, "not an address", "https address such as https://host.example/path");
            return Optional.empty();
        }
        if ("http".equals(url.getScheme()) && !allowHttp) {
            section.refuse(
                    ConfigKeys.Webhook.URL,
                    "an http address",
                    "https address",
                    "To send without TLS all the same, set webhook.allow-http: true.");
            return Optional.empty();
        }
        boolean known = "https".equals(url.getScheme()) || "http".equals(url.getScheme());
        if (!known || url.getHost() == null || url.getRawUserInfo() != null || url.getRawFragment() != null) {
            section.refuse(
                    ConfigKeys.Webhook.URL,
                    "not a plain web address",
                    "https address with a host, without user name and fragment");
            return Optional.empty();
        }
        return Optional.of(url);
    }

    private static boolean isPublic(Values section, URI url) {
        if (!LiteralHost.isPrivate(url.getHost())) {
            return true;
        }
        section.refuse(
                ConfigKeys.Webhook.URL,
                "an address in a private network",
                "a public address",
                "To send there all the same, set webhook.allow-private: true.");
        return false;
    }
}
