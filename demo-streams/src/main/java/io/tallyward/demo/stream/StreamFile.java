package io.tallyward.demo.stream;

import io.tallyward.demo.story.Scenario;
import io.tallyward.demo.story.StreamEvent;
import java.io.BufferedWriter;
import java.io.IOException;
import java.nio.charset.StandardCharsets;
import java.nio.file.Files;
import java.nio.file.Path;

/** The stream as a file: one JSON object per line in the order of arrival; some lines are broken on purpose. */
public final class StreamFile {

    private StreamFile() {}

    /** Writes all events; replaces the file if there is one. About 130 MB. */
    public static void write(Scenario scenario, Path file) throws IOException {
        try (BufferedWriter writer = Files.newBufferedWriter(file, StandardCharsets.UTF_8)) {
            for (StreamEvent event : scenario.events()) {
                writer.write(EventJson.line(event));
                writer.write('\n');
            }
        }
    }
}
