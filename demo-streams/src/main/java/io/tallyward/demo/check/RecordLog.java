package io.tallyward.demo.check;

import static java.nio.charset.StandardCharsets.UTF_8;

import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import java.io.IOException;
import java.io.UncheckedIOException;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.HashSet;
import java.util.List;
import java.util.Map;
import java.util.Set;
import java.util.TreeMap;
import java.util.TreeSet;

/** The committed records of a topic by their key, in the order they were written, byte for byte. */
public final class RecordLog {

    private static final ObjectMapper JSON = new ObjectMapper();

    /** More of a record than this is no help to anybody. */
    private static final int SHOWN_CHARACTERS = 300;

    private final String topic;
    private final Map<String, List<String>> records = new TreeMap<>();

    RecordLog(String topic) {
        this.topic = topic;
    }

    /** Reads a topic from its beginning to its present end. */
    public static RecordLog read(String bootstrapServers, String topic) {
        RecordLog log = new RecordLog(topic);
        CommittedTopic.read(
                bootstrapServers,
                topic,
                record -> log.add(new String(record.key(), UTF_8), new String(record.value(), UTF_8)));
        return log;
    }

    void add(String key, String value) {
        records.computeIfAbsent(key, absent -> new ArrayList<>()).add(value);
    }

    /** How many records there are. */
    public int size() {
        return records.values().stream().mapToInt(List::size).sum();
    }

    /** Values of a text member over all records, in no order. */
    public Set<String> texts(String member) {
        Set<String> texts = new HashSet<>();
        records.values()
                .forEach(list -> list.forEach(
                        value -> texts.add(parse(value).path(member).asText())));
        return texts;
    }

    /** Compares with the log of another run, whose topic may have another name. */
    public Finding sameAs(RecordLog undisturbed) {
        List<String> differences = new ArrayList<>();
        Set<String> keys = new TreeSet<>(records.keySet());
        keys.addAll(undisturbed.records.keySet());
        for (String key : keys) {
            List<String> found = records.getOrDefault(key, List.of());
            List<String> right = undisturbed.records.getOrDefault(key, List.of());
            if (found.size() != right.size()) {
                differences.add(key + ": " + found.size() + " records, undisturbed " + right.size());
            }
            for (int i = 0; i < Math.min(found.size(), right.size()); i++) {
                if (!found.get(i).equals(right.get(i))) {
                    differences.add(key + ": record " + (i + 1) + " is " + shown(found.get(i)) + ", undisturbed "
                            + shown(right.get(i)));
                    break;
                }
            }
        }
        return new Finding(topic + ": every record as in an undisturbed run", differences);
    }

    /** Checks of decision records that each sequence number comes once, from 1 on, and that each names the one before. */
    public Finding chained() {
        List<String> differences = new ArrayList<>();
        records.forEach((key, list) -> {
            String previous = null;
            for (int i = 0; i < list.size(); i++) {
                JsonNode record = parse(list.get(i));
                if (record.path("sequence").asInt() != i + 1) {
                    differences.add(key + ": record " + (i + 1) + " has sequence "
                            + record.path("sequence").asInt() + " (expected: " + (i + 1) + ")");
                    break;
                }
                if (previous != null && !record.path("previous").asText().equals(previous)) {
                    differences.add(key + ": record " + (i + 1) + " does not name the one before it");
                    break;
                }
                previous = record.path("hash").asText();
            }
        });
        return new Finding(topic + ": every sequence number once, in one chain", differences);
    }

    /** Checks that no value of a text member comes twice. */
    public Finding once(String member) {
        Map<String, Integer> counts = new HashMap<>();
        records.values()
                .forEach(list -> list.forEach(
                        value -> counts.merge(parse(value).path(member).asText(), 1, Integer::sum)));
        return new Finding(
                topic + ": every " + member + " once",
                counts.entrySet().stream()
                        .filter(count -> count.getValue() > 1)
                        .map(count -> count.getKey() + ": " + count.getValue() + " times")
                        .toList());
    }

    private static String shown(String record) {
        return record.length() <= SHOWN_CHARACTERS ? record : record.substring(0, SHOWN_CHARACTERS) + "...";
    }

    private static JsonNode parse(String json) {
        try {
            return JSON.readTree(json);
        } catch (IOException e) {
            throw new UncheckedIOException("a record is no JSON", e);
        }
    }
}
