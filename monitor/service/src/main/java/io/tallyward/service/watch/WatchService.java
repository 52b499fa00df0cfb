package io.tallyward.service.watch;

import io.tallyward.connector.kafka.RunnerListener;
import io.tallyward.connector.kafka.ShardGroup;
import io.tallyward.connector.kafka.ShardRunner;
import io.tallyward.engine.decide.DecideShard;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.book.PlanDesk;
import io.tallyward.service.book.PlanFiles;
import io.tallyward.service.config.ServiceConfig;
import io.tallyward.service.http.StatusServer;
import io.tallyward.service.http.StatusSite;
import io.tallyward.service.metrics.MonitorMetrics;
import io.tallyward.service.metrics.ProcessMeters;
import io.tallyward.service.metrics.PrometheusExposition;
import io.tallyward.service.page.Pages;
import io.tallyward.service.status.HealthBoard;
import io.tallyward.service.status.RunnerReport;
import io.tallyward.service.status.StatusBoard;
import io.tallyward.service.status.WebhookReport;
import java.net.InetAddress;
import java.net.URI;
import java.net.UnknownHostException;
import java.time.Clock;
import java.time.InstantSource;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.concurrent.CopyOnWriteArrayList;
import java.util.concurrent.atomic.AtomicReference;
import java.util.function.Supplier;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * One running instance. Starts the HTTP server first, so that probes are answered while state is restored; then deciding
 * and counting, and the delivery of notices last. Stops in reverse. It starts whether or not a broker is there.
 */
public final class WatchService implements AutoCloseable {

    private static final Logger LOG = LoggerFactory.getLogger(WatchService.class);

    private final StatusBoard board = new StatusBoard();
    private final HealthBoard health = new HealthBoard();
    private final ServiceConfig config;
    private final PlanDesk plans;

    /** Filled once the server answers. */
    private final AtomicReference<PlanFiles> planFiles = new AtomicReference<>();

    private final TopicNames names;
    private final Map<String, String> clientProperties;

    /** Filled as the parts start, because the server answers before they do. */
    private final List<Supplier<RunnerReport>> runnerReports = new CopyOnWriteArrayList<>();

    /** Empty until deliveries start, and for good where no webhook is configured. */
    private final AtomicReference<NoticeDelivery> delivery = new AtomicReference<>();

    private final PrometheusExposition exposition;
    private final ProcessMeters processMeters;
    private final StatusServer server;
    private final ShardRunner deciding;
    private final ShardRunner counting;

    private WatchService(ServiceConfig config, String version, RunnerListener listener, InstantSource planClock) {
        this.config = config;
        names = new TopicNames(config.name());
        clientProperties = CountGroup.clientProperties(config);

        exposition = new PrometheusExposition(
                new MonitorMetrics(board, this::runnerReports, this::planTroubles, this::webhookReport, version));
        processMeters = ProcessMeters.bind(exposition.meters());
        StatusSite site = new StatusSite(board, health, exposition, new Pages(Clock.systemUTC()));
        server = StatusServer.start(config.http().host(), config.http().port(), site);
        InstantSource clock = InstantSource.system();
        plans = PlanDesk.start(
                clientProperties, names.plans(), planClock, config.input().maxSkew(), self(config));
        PlanFiles files = PlanFiles.start(config.plans(), plans);
        planFiles.set(files);
        health.add(files.health());
        deciding = ShardRunner.start(decideGroup(), clock, listener);
        counting = ShardRunner.start(CountGroup.of(config, plans, board), clock, listener);
        add("counting", "count", counting);
        add("deciding", "decide", deciding);
        config.webhook().ifPresent(webhook -> {
            URI pages = URI.create(server.address() + "experiments/");
            NoticeDelivery started = NoticeDelivery.start(webhook, names, clientProperties, pages, clock);
            delivery.set(started);
            health.add(started.health());
        });
    }

    private void add(String part, String group, ShardRunner runner) {
        health.add(new RunnerHealth(part, runner::status));
        runnerReports.add(() -> RunnerHealth.report(group, runner.status()));
    }

    /**
     * Starts an instance and returns at once.
     *
     * @param version version of the program, published as a metric
     * @param listener hears about broken invariants; the instance is of no use afterwards
     * @throws java.io.UncheckedIOException when the HTTP address cannot be listened on
     */
    public static WatchService start(ServiceConfig config, List<Plan> plans, String version, RunnerListener listener) {
        return start(config, plans, version, listener, InstantSource.system());
    }

    /** @param planClock what an amendment has to be ahead of */
    static WatchService start(
            ServiceConfig config, List<Plan> plans, String version, RunnerListener listener, InstantSource planClock) {
        WatchService service = new WatchService(config, version, listener, planClock);
        LOG.info(
                "Watching {} on {} at {}; page, metrics and health at {}",
                plans.stream().map(Plan::experiment).toList(),
                config.input().topics(),
                config.kafka().bootstrapServers(),
                service.server.address());
        return service;
    }

    /** Where the page is found, as in {@code http://127.0.0.1:8087/}. */
    public String address() {
        return server.address();
    }

    private ShardGroup decideGroup() {
        return ShardGroup.builder(names.decideGroup())
                .clientProperties(clientProperties)
                .protocol(config.kafka().groupProtocol())
                .member(config.kafka().instance())
                .commitInterval(config.commitInterval())
                .inputTopics(List.of(names.tallies()))
                .missingInput("counting creates it once it has found its own input topics; nothing to do here")
                .stateTopic(names.decideState())
                .rereads()
                .internalTopics(partitions -> names.forDeciding())
                .shards((partition, partitions) ->
                        new DecideHost(new DecideShard(List.of()), plans, partition, names, board))
                .build();
    }

    /** How this instance is named in messages. */
    private static String self(ServiceConfig config) {
        return config.kafka().instance().orElseGet(() -> {
            try {
                return InetAddress.getLocalHost().getHostName();
            } catch (UnknownHostException unknown) {
                return "an instance without a host name";
            }
        });
    }

    private List<RunnerReport> runnerReports() {
        return runnerReports.stream().map(Supplier::get).toList();
    }

    private int planTroubles() {
        return Optional.ofNullable(planFiles.get()).map(PlanFiles::troubles).orElse(0);
    }

    private Optional<WebhookReport> webhookReport() {
        return Optional.ofNullable(delivery.get()).map(NoticeDelivery::report);
    }

    @Override
    public void close() {
        Optional.ofNullable(delivery.get()).ifPresent(NoticeDelivery::close);
        counting.close();
        deciding.close();
        planFiles.get().close();
        plans.close();
        server.close();
        processMeters.close();
        exposition.close();
        LOG.info("Stopped.");
    }
}
