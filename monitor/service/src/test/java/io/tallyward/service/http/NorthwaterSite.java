package io.tallyward.service.http;

import io.tallyward.engine.event.RejectReason;
import io.tallyward.service.metrics.MonitorMetrics;
import io.tallyward.service.metrics.PrometheusExposition;
import io.tallyward.service.page.Pages;
import io.tallyward.service.status.CountReport;
import io.tallyward.service.status.HealthBoard;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import io.tallyward.service.status.Northwater;
import io.tallyward.service.status.StatusBoard;
import java.time.Clock;
import java.time.Duration;
import java.time.ZoneOffset;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.OptionalLong;
import java.util.concurrent.CountDownLatch;

/**
 * Serves Northwater's invented experiments, to look at the pages: {@code main} takes the port and any of "ill",
 * "starting", "unkeyed" and "empty".
 */
final class NorthwaterSite {

    private NorthwaterSite() {}

    public static void main(String[] arguments) throws InterruptedException {
        StatusBoard board = new StatusBoard();
        List<String> situation = List.of(arguments);
        if (!situation.contains("empty")) {
            board.publishExperiments(0, Northwater.all());
        }
        board.publishCounts(0, counted(situation.contains("unkeyed")));
        HealthBoard health = new HealthBoard();
        health.add(() -> new Health("count", State.OK, "Four partitions are counted."));
        if (situation.contains("starting")) {
            health.add(() -> new Health("deciding", State.STARTING, "Restoring state from the group's topic."));
        }
        if (situation.contains("ill")) {
            health.add(() -> new Health(
                    "webhook",
                    State.DOWN,
                    "No notice was delivered for 42 min; 3 wait. Check the receiver's address."));
        }
        try (StatusServer server =
                StatusServer.start("127.0.0.1", Integer.parseInt(arguments[0]), site(board, health))) {
            System.out.println(server.address());
            new CountDownLatch(1).await();
        }
    }

    private static CountReport counted(boolean unkeyed) {
        return new CountReport(
                Map.of(), OptionalLong.empty(), Map.of(RejectReason.values()[0], 1_204L), 60_789, unkeyed);
    }

    /** A site whose clock stands a few days into the run. */
    static StatusSite site(StatusBoard board, HealthBoard health) {
        MonitorMetrics metrics = new MonitorMetrics(board, List::of, () -> 0, Optional::empty, "0.1.0");
        Clock clock = Clock.fixed(Northwater.START.plus(Duration.ofHours(136)), ZoneOffset.UTC);
        return new StatusSite(board, health, new PrometheusExposition(metrics), new Pages(clock));
    }
}
