package io.tallyward.service.http;

import io.tallyward.service.metrics.MonitorMetrics;
import io.tallyward.service.metrics.PrometheusExposition;
import io.tallyward.service.page.Pages;
import io.tallyward.service.status.HealthBoard;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.HealthSource.State;
import io.tallyward.service.status.Northwater;
import io.tallyward.service.status.StatusBoard;
import java.time.Clock;
import java.time.Duration;
import java.time.ZoneOffset;
import java.util.List;
import java.util.Optional;
import java.util.concurrent.CountDownLatch;

/** Serves Northwater's invented experiments, to look at the pages: {@code main} takes the port and, optionally, "ill". */
final class NorthwaterSite {

    private NorthwaterSite() {}

    public static void main(String[] arguments) throws InterruptedException {
        StatusBoard board = new StatusBoard();
        board.publishExperiments(0, Northwater.all());
        HealthBoard health = new HealthBoard();
        health.add(() -> new Health("count", State.OK, "Four partitions are counted."));
        if (arguments.length > 1) {
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

    /** A site whose clock stands a few days into the run. */
    static StatusSite site(StatusBoard board, HealthBoard health) {
        MonitorMetrics metrics = new MonitorMetrics(board, List::of, Optional::empty, "0.1.0");
        Clock clock = Clock.fixed(Northwater.START.plus(Duration.ofHours(136)), ZoneOffset.UTC);
        return new StatusSite(board, health, new PrometheusExposition(metrics), new Pages(clock));
    }
}
