package io.tallyward.demo;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import io.tallyward.demo.receiver.SignatureCheck;
import io.tallyward.demo.story.ToldScenario;
import io.tallyward.service.config.ConfigReader;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.config.document.Checked;
import java.net.URI;
import java.nio.file.Path;
import java.util.List;
import java.util.Map;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.io.TempDir;

class MonitorFilesTest {

    @TempDir
    private Path directory;

    @Test
    void monitorReadsItsConfiguration() throws Exception {
        String secret = SignatureCheck.newSecret();
        MonitorFiles.Surroundings surroundings = new MonitorFiles.Surroundings(
                "127.0.0.1:29092", 28087, URI.create("http://127.0.0.1:28080/notices"), secret, "k".repeat(44));
        Path file = MonitorFiles.write(directory, ToldScenario.withDefaultSeed(), surroundings);
        Checked<ServiceConfig> read = new ConfigReader(Map.of()).read(file);
        assertTrue(read.problems().isEmpty(), () -> read.problems().toString());
        ServiceConfig config = read.orElseThrow();
        assertEquals("127.0.0.1:29092", config.kafka().bootstrapServers());
        assertEquals(List.of(MonitorFiles.TOPIC), config.input().topics());
        assertEquals(28087, config.http().port());
        assertTrue(config.webhook().isPresent());
        assertTrue(config.unitKey().isPresent());
        assertFalse(surroundings.toString().contains(secret));
    }
}
