package io.tallyward.service.watch;

import java.util.List;
import java.util.Map;
import java.util.Optional;
import org.apache.kafka.clients.admin.Admin;
import org.apache.kafka.clients.admin.NewTopic;

/** Creates topics on a broker that a test started by itself. */
final class BrokerTopics implements AutoCloseable {

    private final Admin admin;

    BrokerTopics(String bootstrapServers) {
        admin = Admin.create(Map.of("bootstrap.servers", bootstrapServers));
    }

    void create(String name, int partitions) throws Exception {
        admin.createTopics(List.of(new NewTopic(name, Optional.of(partitions), Optional.empty())))
                .all()
                .get();
    }

    @Override
    public void close() {
        admin.close();
    }
}
