package io.tallyward.service.http;

import com.fasterxml.jackson.core.JsonProcessingException;
import com.fasterxml.jackson.databind.JsonNode;
import com.fasterxml.jackson.databind.ObjectMapper;
import com.fasterxml.jackson.databind.node.ArrayNode;
import com.fasterxml.jackson.databind.node.JsonNodeFactory;
import com.fasterxml.jackson.databind.node.ObjectNode;
import io.javalin.config.RoutesConfig;
import io.javalin.http.Context;
import io.javalin.http.Handler;
import io.javalin.http.HandlerType;
import io.tallyward.engine.decide.ExperimentView;
import io.tallyward.service.metrics.PrometheusExposition;
import io.tallyward.service.page.MonitorState;
import io.tallyward.service.page.Pages;
import io.tallyward.service.status.HealthBoard;
import io.tallyward.service.status.HealthSource.Health;
import io.tallyward.service.status.StatusBoard;
import java.util.List;
import java.util.Locale;
import java.util.Optional;
import java.util.function.Predicate;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * What the server serves: metrics, health, the API and the pages. Read-only; nothing a request says is ever stored.
 *
 * @param board state of the experiments
 * @param health state of the process
 * @param metrics what Prometheus is told
 * @param pages what people are shown
 */
public record StatusSite(StatusBoard board, HealthBoard health, PrometheusExposition metrics, Pages pages) {

    private static final Logger LOG = LoggerFactory.getLogger(StatusSite.class);
    private static final ObjectMapper JSON = new ObjectMapper();
    private static final String HTML = "text/html; charset=utf-8";

    void routes(RoutesConfig routes) {
        routes.before(StatusSite::guard);
        serve(
                routes,
                "/metrics",
                ctx -> ctx.contentType(PrometheusExposition.CONTENT_TYPE).result(metrics.text()));
        serve(routes, "/health/live", ctx -> health(ctx, HealthBoard::alive));
        serve(routes, "/health/ready", ctx -> health(ctx, HealthBoard::ready));
        serve(
                routes,
                "/api/experiments",
                ctx -> json(ctx, ExperimentJson.list(board.experiments().values())));
        serve(routes, "/api/experiments/{name}", this::apiExperiment);
        serve(
                routes,
                "/api/partitions",
                ctx -> json(ctx, PartitionJson.list(board.counts().reports())));
        serve(
                routes,
                "/",
                ctx -> ctx.contentType(HTML)
                        .result(pages.overview(board.experiments().values(), monitor())));
        serve(routes, "/experiments/{name}", this::pageExperiment);
        serve(
                routes,
                "/assets/page.css",
                ctx -> ctx.contentType("text/css; charset=utf-8").result(Pages.styleSheet()));
        serve(
                routes,
                "/assets/live.js",
                ctx -> ctx.contentType("text/javascript; charset=utf-8").result(Pages.script()));
        serve(
                routes,
                "/assets/mark.svg",
                ctx -> ctx.contentType("image/svg+xml").result(Pages.mark()));
        serve(routes, "/<elsewhere>", this::nothingHere);
        routes.exception(Exception.class, (failure, ctx) -> {
            LOG.error("http: a request could not be answered; the state shown elsewhere is not affected", failure);
            json(ctx.status(500), sentence("The answer could not be made. The log of the monitor says why."));
        });
    }

    /** A HEAD request goes the same way as GET, so that its status and headers are the same; the server drops the body. */
    private static void serve(RoutesConfig routes, String path, Handler handler) {
        routes.get(path, handler);
        routes.head(path, handler);
    }

    /** Refuses every method that could change something and sets the headers of every answer. */
    private static void guard(Context ctx) {
        ctx.header(
                "Content-Security-Policy",
                "default-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'");
        ctx.header("X-Content-Type-Options", "nosniff");
        ctx.header("Referrer-Policy", "no-referrer");
        ctx.header("Cache-Control", "no-store");
        if (!ctx.method().equals(HandlerType.GET) && !ctx.method().equals(HandlerType.HEAD)) {
            json(ctx.status(405).header("Allow", "GET, HEAD"), sentence("This server only answers GET and HEAD."));
            ctx.skipRemainingHandlers();
        }
    }

    private void health(Context ctx, Predicate<List<Health>> good) {
        List<Health> checks = health.checks();
        boolean fine = good.test(checks);
        ObjectNode answer = JsonNodeFactory.instance.objectNode();
        answer.put("status", fine ? "ok" : "unavailable");
        ArrayNode list = answer.putArray("checks");
        for (Health check : checks) {
            list.addObject()
                    .put("name", check.name())
                    .put("state", check.state().name().toLowerCase(Locale.ROOT))
                    .put("detail", check.detail());
        }
        json(ctx.status(fine ? 200 : 503), answer);
    }

    private void apiExperiment(Context ctx) {
        String name = ctx.pathParam("name");
        Optional<ExperimentView> view = board.experiment(name);
        if (view.isPresent()) {
            json(ctx, ExperimentJson.one(view.get()));
        } else {
            json(
                    ctx.status(404),
                    sentence("This instance decides about no experiment of that name; another instance may."
                            + " Those it knows are listed at /api/experiments."));
        }
    }

    private void pageExperiment(Context ctx) {
        Optional<ExperimentView> view = board.experiment(ctx.pathParam("name"));
        ctx.contentType(HTML);
        if (view.isPresent()) {
            ctx.result(pages.experiment(view.get(), monitor()));
        } else {
            ctx.status(404).result(pages.notFound());
        }
    }

    private MonitorState monitor() {
        return MonitorState.of(health.checks(), board.counts());
    }

    private void nothingHere(Context ctx) {
        ctx.status(404);
        if (ctx.path().startsWith("/api/")) {
            json(ctx, sentence("There is nothing here. The API is at /api/experiments."));
        } else {
            ctx.contentType(HTML).result(pages.notFound());
        }
    }

    private static ObjectNode sentence(String text) {
        return JsonNodeFactory.instance.objectNode().put("message", text);
    }

    private static void json(Context ctx, JsonNode node) {
        try {
            ctx.contentType("application/json").result(JSON.writeValueAsBytes(node));
        } catch (JsonProcessingException e) {
            throw new IllegalStateException("json: a tree could not be written", e);
        }
    }
}
