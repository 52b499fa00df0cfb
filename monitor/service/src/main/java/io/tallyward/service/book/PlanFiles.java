package io.tallyward.service.book;

import io.tallyward.connector.kafka.BrokerException;
import io.tallyward.engine.plan.Plan;
import io.tallyward.service.config.document.Problem;
import io.tallyward.service.plan.PlanDirectory;
import io.tallyward.service.status.HealthSource;
import java.nio.file.Path;
import java.time.Duration;
import java.util.List;
import java.util.concurrent.CountDownLatch;
import java.util.concurrent.TimeUnit;
import java.util.stream.Collectors;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Proposes what the plan files say: all of them at the start, and again whenever they change. Files are looked at every few
 * seconds, which works wherever they come from, links that are swapped under a directory included. A file that cannot be used
 * is told about and changes nothing, and so does one that is gone.
 */
public final class PlanFiles implements AutoCloseable {

    /** How often the files are looked at. */
    static final Duration EVERY = Duration.ofSeconds(5);

    private static final Logger LOG = LoggerFactory.getLogger(PlanFiles.class);
    private static final int MOST_NAMED = 5;
    private static final Duration RETRY = Duration.ofSeconds(1);
    private static final Duration STOP_PATIENCE = Duration.ofSeconds(12);

    private final Path directory;
    private final PlanDesk desk;
    private final CountDownLatch stop = new CountDownLatch(1);
    private final Thread thread;

    private String proposed = "";
    private List<Plan> said = List.of();
    private volatile Findings findings = new Findings(false, 0, List.of(), List.of());

    /** What is the case with the files, as of the last time they were looked at. */
    private record Findings(boolean known, int plans, List<Problem> problems, List<PlanDesk.Rejected> rejected) {}

    private PlanFiles(Path directory, PlanDesk desk) {
        this.directory = directory;
        this.desk = desk;
        thread = new Thread(this::run, "plan-files");
        thread.setDaemon(true);
    }

    /** Starts looking at the files of a directory, in a thread of its own. */
    public static PlanFiles start(Path directory, PlanDesk desk) {
        PlanFiles files = new PlanFiles(directory, desk);
        files.thread.start();
        return files;
    }

    private void run() {
        Duration pause = Duration.ZERO;
        while (!stopped(pause)) {
            pause = look() ? EVERY : RETRY;
        }
    }

    private boolean stopped(Duration pause) {
        try {
            return stop.await(pause.toMillis(), TimeUnit.MILLISECONDS);
        } catch (InterruptedException interrupted) {
            Thread.currentThread().interrupt();
            return true;
        }
    }

    /** Proposes what is new; false if that has to be tried again. */
    private boolean look() {
        String print = PlanDirectory.print(directory);
        if (print.equals(proposed)) {
            compare();
            return true;
        }
        PlanDirectory.Contents contents = PlanDirectory.readUsable(directory);
        try {
            List<PlanDesk.Rejected> rejected = desk.propose(contents.plans());
            contents.problems().forEach(problem -> LOG.warn("A plan file changes nothing: {}", problem.message()));
            sayRejected(rejected);
            findings = new Findings(true, contents.plans().size(), contents.problems(), rejected);
            said = contents.plans();
            proposed = print;
            return true;
        } catch (BrokerException later) {
            LOG.debug("Plans are proposed later", later);
            return false;
        } catch (RuntimeException unexpected) {
            LOG.error("Plan files cannot be proposed; trying again", unexpected);
            return false;
        }
    }

    /** Others may have proposed other plans since. */
    private void compare() {
        Findings before = findings;
        List<PlanDesk.Rejected> rejected = desk.differing(said);
        if (!rejected.equals(before.rejected())) {
            sayRejected(rejected);
            findings = new Findings(true, before.plans(), before.problems(), rejected);
        }
    }

    private void sayRejected(List<PlanDesk.Rejected> rejected) {
        for (PlanDesk.Rejected plan : rejected) {
            LOG.warn(
                    "The plan of {} in {} is not the one that stands: {}. Counts and decisions go by the one that stands,"
                            + " which the experiment's page shows.",
                    plan.experiment(),
                    directory,
                    plan.reason());
        }
    }

    /** How it is with the files: whatever they say, the plans that stand are counted and decided by. */
    public HealthSource health() {
        return () -> {
            Findings now = findings;
            if (!now.known()) {
                return new HealthSource.Health(
                        "plans",
                        HealthSource.State.STARTING,
                        "Reading the book of plans; then the files are proposed.");
            }
            boolean trouble = !now.problems().isEmpty() || !now.rejected().isEmpty();
            return new HealthSource.Health("plans", HealthSource.State.OK, detail(now), trouble);
        };
    }

    private static String detail(Findings now) {
        String detail = now.plans() + (now.plans() == 1 ? " plan file" : " plan files") + " can be used.";
        if (!now.problems().isEmpty()) {
            detail += " Cannot be used: "
                    + now.problems().stream()
                            .limit(MOST_NAMED)
                            .map(Problem::message)
                            .collect(Collectors.joining("; "))
                    + ".";
        }
        if (!now.rejected().isEmpty()) {
            detail += " Not what stands and is counted by: "
                    + now.rejected().stream()
                            .limit(MOST_NAMED)
                            .map(PlanDesk.Rejected::experiment)
                            .collect(Collectors.joining(", "))
                    + ".";
        }
        return detail;
    }

    /** Plan files that cannot be used, and plans in files that were refused. */
    public int troubles() {
        Findings now = findings;
        return now.problems().size() + now.rejected().size();
    }

    @Override
    public void close() {
        stop.countDown();
        try {
            thread.join(STOP_PATIENCE.toMillis());
        } catch (InterruptedException interrupted) {
            Thread.currentThread().interrupt();
        }
    }
}
