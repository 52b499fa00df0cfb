package io.tallyward.service.book;

import io.tallyward.connector.format.PlanEntryJson;
import io.tallyward.connector.kafka.BrokerException;
import io.tallyward.connector.kafka.SharedLog;
import io.tallyward.connector.kafka.SharedLogStatus;
import io.tallyward.connector.kafka.WorkerState;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanBook;
import io.tallyward.engine.plan.PlanBook.Ruling;
import io.tallyward.engine.plan.PlanEntry;
import io.tallyward.engine.plan.PlanTerms;
import io.tallyward.service.plan.AmendmentWords;
import java.nio.charset.StandardCharsets;
import java.time.Duration;
import java.time.Instant;
import java.time.InstantSource;
import java.util.ArrayList;
import java.util.Collection;
import java.util.Collections;
import java.util.List;
import java.util.Map;
import java.util.Optional;
import java.util.stream.Collectors;
import org.slf4j.Logger;
import org.slf4j.LoggerFactory;

/**
 * Keeps this instance's copy of the book of plans, which all instances share as a topic, and writes into it what this instance
 * proposes and freezes. Thread-safe.
 */
public final class PlanDesk implements PlanSource, AutoCloseable {

    private static final Logger LOG = LoggerFactory.getLogger(PlanDesk.class);

    /** How long the broker may take to write an entry and to give it back. */
    private static final Duration PATIENCE = Duration.ofSeconds(10);

    /**
     * An amendment takes effect later than anything that can have been counted by instances that do not know of it yet: these
     * learn of it within a second, and do not count on when they have not heard of the book for as long as half of this.
     */
    static final Duration LEAD = Duration.ofMinutes(2);

    private final SharedLog log;
    private final InstantSource clock;
    private final Duration maxSkew;
    private final String by;

    /** Guarded by this. */
    private final PlanBook book = new PlanBook();

    /** Guarded by this; null where the book has changed since. */
    private PlanSnapshot current;

    /** Guarded by this. */
    private long version;

    /** Whether everything written has been read once, and what the files of this instance say is in it. */
    private volatile boolean open;

    private PlanDesk(
            Map<String, String> clientProperties, String topic, InstantSource clock, Duration maxSkew, String by) {
        this.clock = clock;
        this.maxSkew = maxSkew;
        this.by = by;
        log = SharedLog.start(clientProperties, topic, clock, this::read);
    }

    /**
     * Starts reading the book and returns at once.
     *
     * @param maxSkew how far an admitted event may lie ahead of its record's timestamp
     * @param by how this instance is named in messages
     */
    public static PlanDesk start(
            Map<String, String> clientProperties, String topic, InstantSource clock, Duration maxSkew, String by) {
        return new PlanDesk(clientProperties, topic, clock, maxSkew, by);
    }

    /** The earliest moment at which an amendment that is proposed now may take effect. */
    public static Instant notBefore(Instant now, Duration maxSkew) {
        return now.plus(maxSkew).plus(LEAD);
    }

    private void read(SharedLog.Entry entry) {
        PlanEntry read = PlanEntryJson.read(entry.value());
        Optional<Ruling> ruling;
        synchronized (this) {
            ruling = book.take(read);
            version++;
            current = null;
        }
        if (!open) {
            return;
        }
        ruling.ifPresent(told -> say((PlanEntry.Proposal) read, told));
        if (ruling.isEmpty()) {
            LOG.info("{}: the plan is frozen; from now on it can be amended, and not changed", read.experiment());
        }
    }

    /** What is refused of this instance's own files is told with the files. */
    private void say(PlanEntry.Proposal proposal, Ruling ruling) {
        String experiment = proposal.experiment();
        if (ruling instanceof Ruling.Adopted) {
            LOG.info("{}: the plan proposed by {} stands until its first event freezes it", experiment, proposal.by());
        } else if (ruling instanceof Ruling.Amended amended) {
            amended.added()
                    .forEach(amendment -> LOG.info(
                            "{}: amended by {} from {} on: {} ({})",
                            experiment,
                            proposal.by(),
                            amendment.at(),
                            AmendmentWords.of(amendment.change()),
                            amendment.reason()));
        } else if (ruling instanceof Ruling.Refused refused && !proposal.by().equals(by)) {
            LOG.warn(
                    "{}: the plan proposed by {} is refused, and the frozen plan stands: {}",
                    experiment,
                    proposal.by(),
                    refused.reason());
        }
    }

    @Override
    public PlanSnapshot snapshot() {
        requireOpen();
        return copy();
    }

    /** Counting before the files are in the book would take events of their experiments for those of unknown ones. */
    private void requireOpen() {
        requireReadable();
        if (!open) {
            throw new BrokerException("the book of plans is not read yet, or the plan files are not in it: "
                    + log.status().lastError().orElse("reading it"));
        }
    }

    private void requireReadable() {
        SharedLogStatus status = log.status();
        if (status.state() == WorkerState.FAILED) {
            throw new IllegalStateException(
                    "the book of plans cannot be read: " + status.lastError().orElse("its log says why"));
        }
    }

    private synchronized PlanSnapshot copy() {
        if (current == null) {
            current = new PlanSnapshot(
                    version, Collections.unmodifiableMap(book.entries()), Collections.unmodifiableMap(book.refusals()));
        }
        return current;
    }

    @Override
    public PlanSnapshot catchUp() {
        requireOpen();
        readOn();
        return copy();
    }

    private void readOn() {
        requireReadable();
        log.catchUp(PATIENCE);
    }

    @Override
    public PlanSnapshot freeze(Collection<String> experiments) {
        append(experiments.stream().<PlanEntry>map(PlanEntry.Freeze::new).toList());
        return copy();
    }

    private void append(List<PlanEntry> entries) {
        log.append(
                entries.stream()
                        .map(entry -> new SharedLog.Entry(
                                entry.experiment().getBytes(StandardCharsets.UTF_8), PlanEntryJson.write(entry)))
                        .toList(),
                PATIENCE);
    }

    /**
     * Proposes plans, as far as they are not what stands and have not been refused before.
     *
     * @return why plans do not stand, by experiment
     * @throws BrokerException when that cannot be written and read back
     */
    public List<Rejected> propose(List<Plan> plans) {
        readOn();
        Instant notBefore = notBefore(clock.instant(), maxSkew);
        List<PlanEntry> proposals = new ArrayList<>();
        for (Plan plan : plans) {
            if (isNew(plan, notBefore)) {
                proposals.add(new PlanEntry.Proposal(plan, notBefore, by));
            }
        }
        if (!proposals.isEmpty()) {
            append(proposals);
        }
        open = true;
        return differing(plans);
    }

    /**
     * A plan of a file that does not stand.
     *
     * @param experiment name of the experiment
     * @param reason why, in words
     */
    public record Rejected(String experiment, String reason) {}

    private synchronized boolean isNew(Plan plan, Instant notBefore) {
        return !(book.rule(plan, notBefore) instanceof Ruling.Unchanged)
                && book.refusal(plan).isEmpty();
    }

    /**
     * The plans that are not what stands, and why: they were refused, or another instance proposed another one.
     *
     * @param plans what the files of this instance say
     */
    public synchronized List<Rejected> differing(List<Plan> plans) {
        List<Rejected> rejected = new ArrayList<>();
        for (Plan plan : plans) {
            Optional<PlanBook.Entry> standing = book.entry(plan.experiment());
            if (standing.isPresent() && !standing.get().plan().equals(plan)) {
                rejected.add(new Rejected(
                        plan.experiment(),
                        book.refusal(plan)
                                .map(PlanBook.Refusal::reason)
                                .orElseGet(() -> difference(standing.get(), plan))));
            }
        }
        return rejected;
    }

    private static String difference(PlanBook.Entry standing, Plan plan) {
        List<PlanTerms.Difference> terms = PlanTerms.differences(standing.plan(), plan);
        return terms.isEmpty()
                ? "its amendments are not the " + standing.plan().amendments().size() + " that stand"
                : "another one was proposed after it: "
                        + terms.stream().map(PlanTerms.Difference::toString).collect(Collectors.joining("; "));
    }

    @Override
    public void requireRecent() {
        requireReadable();
        SharedLogStatus status = log.status();
        Instant oldest = clock.instant().minus(LEAD.dividedBy(2));
        if (status.confirmed().filter(moment -> !moment.isBefore(oldest)).isEmpty()) {
            throw new BrokerException("the book of plans has not been read for "
                    + LEAD.dividedBy(2).toSeconds()
                    + " s, so that an amendment may have been missed: "
                    + status.lastError().orElse("the broker does not answer"));
        }
    }

    @Override
    public void close() {
        log.close();
    }
}
