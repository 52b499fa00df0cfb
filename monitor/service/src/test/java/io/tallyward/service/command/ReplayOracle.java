package io.tallyward.service.command;

import io.tallyward.connector.format.Decoded;
import io.tallyward.connector.format.JsonEventReader;
import io.tallyward.engine.count.CountSettings;
import io.tallyward.engine.count.CountShard;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.record.DecisionRecord;
import java.time.Duration;
import java.util.ArrayList;
import java.util.List;
import org.apache.kafka.clients.consumer.ConsumerRecord;

/** Decides over the records of a topic as they lie in its partitions, one partition after the other. */
public final class ReplayOracle {

    private ReplayOracle() {}

    /** The decision records that follow from a topic without ever letting time pass. */
    public static List<DecisionRecord> decisions(
            List<Plan> plans, int partitions, List<ConsumerRecord<byte[], byte[]>> records, JsonEventReader reader) {
        CountSettings settings = new CountSettings(Duration.ofMinutes(5), Duration.ofMinutes(5), new byte[] {1});
        List<CountShard> shards = new ArrayList<>();
        for (int partition = 0; partition < partitions; partition++) {
            shards.add(new CountShard(partition, partitions, plans, settings, List.of("events")));
        }
        for (ConsumerRecord<byte[], byte[]> record : records) {
            if (reader.read(record.value()) instanceof Decoded.Accepted accepted) {
                shards.get(record.partition()).apply(0, record.timestamp(), accepted.event());
            }
        }
        DecideShard deciding = new DecideShard(plans);
        shards.forEach(shard -> shard.drain().tallies().forEach(deciding::apply));
        return deciding.drain().decisions();
    }
}
