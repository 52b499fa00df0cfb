package io.tallyward.demo;

import java.util.List;
import java.util.Map;
import java.util.concurrent.ExecutionException;
import java.util.concurrent.TimeUnit;
import java.util.concurrent.TimeoutException;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.AdminClientConfig;
import org.apache.kafka.clients.admin.NewTopic;

/** The topic of the page's events. */
public final class InputTopic {

    private static final long PATIENCE_SECONDS = 30;

    private InputTopic() {}

    /**
     * Creates a topic that keeps records whatever their timestamps: the stream's time is neither the broker's past nor its
     * future, but its own.
     */
    public static void create(String bootstrapServers, String topic, int partitions) throws InterruptedException {
        Map<String, String> settings = Map.of(
                "retention.ms",
                "-1",
                "message.timestamp.type",
                "CreateTime",
                "message.timestamp.before.max.ms",
                Long.toString(Long.MAX_VALUE),
                "message.timestamp.after.max.ms",
                Long.toString(Long.MAX_VALUE));
        try (Admin admin = Admin.create(Map.of(AdminClientConfig.BOOTSTRAP_SERVERS_CONFIG, bootstrapServers))) {
            NewTopic wanted = new NewTopic(topic, partitions, (short) 1).configs(settings);
            admin.createTopics(List.of(wanted)).all().get(PATIENCE_SECONDS, TimeUnit.SECONDS);
        } catch (ExecutionException | TimeoutException e) {
            throw new IllegalStateException("topic " + topic + ": could not be created at " + bootstrapServers, e);
        }
    }
}
