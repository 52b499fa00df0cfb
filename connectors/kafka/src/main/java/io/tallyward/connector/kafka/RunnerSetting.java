package io.tallyward.connector.kafka;

import java.time.InstantSource;
import java.util.Objects;

/** What all workers of a runner have in common. */
record RunnerSetting(ShardGroup group, InstantSource clock, RunnerListener listener, OutageLog outages) {

    RunnerSetting {
        Objects.requireNonNull(group, "group");
        Objects.requireNonNull(clock, "clock");
        Objects.requireNonNull(listener, "listener");
        Objects.requireNonNull(outages, "outages");
    }
}
