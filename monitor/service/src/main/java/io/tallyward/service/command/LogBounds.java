package io.tallyward.service.command;

import io.tallyward.connector.kafka.LogBound;
import io.tallyward.service.config.document.ScalarType;
import java.util.HashMap;
import java.util.Map;
import java.util.Optional;
import java.util.regex.Matcher;
import java.util.regex.Pattern;
import org.apache.kafka.common.TopicPartition;

/** Reads where a stretch of a log begins or ends, as the command line has it. */
final class LogBounds {

    /** What can be read. */
    static final String EXPECTED =
            "RFC 3339 time such as 2026-05-04T00:00:00Z, or offsets such as events-0@1200,events-1@900";

    /** The form in which rejected records are named too: topic, partition, offset. */
    private static final Pattern OFFSET = Pattern.compile("([A-Za-z0-9._-]{1,249})-(\\d{1,6})@(\\d{1,18})");

    private LogBounds() {}

    /** The bound; empty when the text is none. */
    static Optional<LogBound> parse(String text) {
        Optional<LogBound> time = ScalarType.parseInstant(text).map(LogBound.At::new);
        return time.isPresent() ? time : offsets(text);
    }

    private static Optional<LogBound> offsets(String text) {
        Map<TopicPartition, Long> offsets = new HashMap<>();
        for (String part : text.split(",", -1)) {
            Matcher matcher = OFFSET.matcher(part.strip());
            if (!matcher.matches()) {
                return Optional.empty();
            }
            TopicPartition partition = new TopicPartition(matcher.group(1), Integer.parseInt(matcher.group(2)));
            if (offsets.put(partition, Long.valueOf(matcher.group(3))) != null) {
                return Optional.empty();
            }
        }
        return Optional.of(new LogBound.Offsets(offsets));
    }
}
