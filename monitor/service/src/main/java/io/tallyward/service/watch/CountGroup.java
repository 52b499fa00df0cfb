package io.tallyward.service.watch;

import io.tallyward.connector.format.EventSlotReader;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.connector.kafka.ShardGroup;
import io.tallyward.connector.kafka.StartPosition;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.count.CountShard;
import io.tallyward.service.book.PlanSource;
import io.tallyward.service.config.InputStart;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.status.StatusBoard;
import java.util.HashMap;
import java.util.List;
import java.util.Map;

/** The counting side of an instance: what is read, by which shards, and where it goes. */
public final class CountGroup {

    private CountGroup() {}

    /**
     * The group that counts.
     *
     * @param config the instance's configuration
     * @param plans where the shards learn what to count under
     * @param board where the shards publish their reports, after each commit
     */
    public static ShardGroup of(ServiceConfig config, PlanSource plans, StatusBoard board) {
        TopicNames names = new TopicNames(config.name());
        CountSettings settings =
                new CountSettings(config.input().maxSkew(), config.input().idleAfter(), UnitKey.of(config));
        JsonEventReader reader =
                new JsonEventReader(config.input().mapping(), config.input().maxEventBytes());
        List<String> topics = config.input().topics();
        TrafficLog trafficLog = new TrafficLog(names.rejects());
        return ShardGroup.builder(names.countGroup())
                .clientProperties(clientProperties(config))
                .protocol(config.kafka().groupProtocol())
                .member(config.kafka().instance())
                .commitInterval(config.commitInterval())
                .inputTopics(topics)
                .stateTopic(names.countState())
                .internalTopics(names::forCounting)
                .start(startPosition(config.input().start()))
                .workers(config.workers())
                .shards((partition, partitions) -> {
                    CountShard shard = new CountShard(partition, partitions, List.of(), settings, topics);
                    return new CountHost(
                            shard,
                            partition,
                            partitions,
                            topics,
                            names,
                            known -> EventParser.of(
                                    reader,
                                    new EventSlotReader(
                                            config.input().mapping(),
                                            config.input().maxEventBytes(),
                                            known)),
                            plans,
                            trafficLog,
                            board);
                })
                .build();
    }

    static Map<String, String> clientProperties(ServiceConfig config) {
        Map<String, String> properties = new HashMap<>(config.kafka().properties());
        properties.put("bootstrap.servers", config.kafka().bootstrapServers());
        return properties;
    }

    private static StartPosition startPosition(InputStart start) {
        if (start instanceof InputStart.At at) {
            return StartPosition.at(at.time());
        }
        return start instanceof InputStart.Latest ? StartPosition.latest() : StartPosition.earliest();
    }
}
