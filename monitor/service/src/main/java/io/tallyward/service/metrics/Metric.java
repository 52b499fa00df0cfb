package io.tallyward.service.metrics;

import java.util.List;

/** Every metric of the monitor's own. Names and labels are published and stable. */
enum Metric {
    BUILD_INFO("tallyward_build_info", Kind.GAUGE, "Always 1; the label tells which version runs.", "version"),

    EVENTS(
            "tallyward_events_total",
            Kind.COUNTER,
            "Events of an experiment whose outcome is final, counted by this instance.",
            "experiment",
            "outcome"),
    EVENTS_OPEN(
            "tallyward_events_open",
            Kind.GAUGE,
            "Events of an experiment whose outcome may still change, because their window is not sealed.",
            "experiment"),
    REJECTED("tallyward_rejected_total", Kind.COUNTER, "Records that were not admitted as events.", "reason"),
    WATERMARK(
            "tallyward_watermark_timestamp_seconds",
            Kind.GAUGE,
            "Event time up to which an input partition has been read; absent before its first event.",
            "partition"),
    LEDGER_UNITS(
            "tallyward_ledger_units", Kind.GAUGE, "Units that an input partition's ledger remembers.", "partition"),
    KEYED(
            "tallyward_topic_keyed_by_unit",
            Kind.GAUGE,
            "1 while no partition has seen a unit that belongs to another one, else 0; counts need 1."),

    UNITS(
            "tallyward_units",
            Kind.GAUGE,
            "Units in complete windows, over all epochs; as many as trials where the plan counts units.",
            "experiment",
            "variant"),
    TRIALS(
            "tallyward_trials",
            Kind.GAUGE,
            "Trials (units, or views where the plan counts views) in complete windows, over all epochs.",
            "experiment",
            "variant"),
    SUCCESSES(
            "tallyward_successes",
            Kind.GAUGE,
            "Trials in complete windows that became a success, over all epochs.",
            "experiment",
            "variant"),
    COMPLETE_UNTIL(
            "tallyward_complete_until_timestamp_seconds",
            Kind.GAUGE,
            "End of the last window that every partition has sealed; absent before the first.",
            "experiment"),

    LOOKS("tallyward_looks_total", Kind.COUNTER, "Looks taken at an experiment.", "experiment"),
    LOOKS_DELAYED("tallyward_looks_delayed_total", Kind.COUNTER, "Looks that were due and had to wait.", "experiment"),
    Z(
            "tallyward_z",
            Kind.GAUGE,
            "Test statistic of a variant against the control at its latest look; absent before the first.",
            "experiment",
            "variant"),
    BOUNDARY_UPPER(
            "tallyward_boundary_upper",
            Kind.GAUGE,
            "Upper boundary for tallyward_z at that look; absent when that tail spends nothing.",
            "experiment",
            "variant"),
    BOUNDARY_LOWER(
            "tallyward_boundary_lower",
            Kind.GAUGE,
            "Lower boundary for tallyward_z at that look; absent when that tail spends nothing.",
            "experiment",
            "variant"),
    BOUNDARY_FUTILITY(
            "tallyward_boundary_futility",
            Kind.GAUGE,
            "Futility boundary at that look, on the scale of z in the direction of benefit; absent without one.",
            "experiment",
            "variant"),
    INFORMATION_FRACTION(
            "tallyward_information_fraction",
            Kind.GAUGE,
            "Information at that look over its planned maximum; may exceed 1 at the last look.",
            "experiment",
            "variant"),
    ALPHA_SPENT(
            "tallyward_alpha_spent_ratio",
            Kind.GAUGE,
            "Type I error spent up to that look, both tails, as a probability.",
            "experiment",
            "variant"),
    DESIGN_EFFECT(
            "tallyward_design_effect",
            Kind.GAUGE,
            "Variance of the difference over that of independent views, at the latest look; only where views are counted.",
            "experiment",
            "variant"),
    DIFFERENCE(
            "tallyward_difference",
            Kind.GAUGE,
            "Success rate of a variant minus that of the control at that look, not adjusted for stopping.",
            "experiment",
            "variant"),
    DIFFERENCE_LOWER(
            "tallyward_difference_lower",
            Kind.GAUGE,
            "Lower end of the repeated confidence interval of the difference; absent when unbounded.",
            "experiment",
            "variant"),
    DIFFERENCE_UPPER(
            "tallyward_difference_upper",
            Kind.GAUGE,
            "Upper end of the repeated confidence interval of the difference; absent when unbounded.",
            "experiment",
            "variant"),
    PREDICTIVE_POWER(
            "tallyward_predictive_power",
            Kind.GAUGE,
            "Probability at that look, given the data so far, that a benefit is found at the planned end; absent when there"
                    + " is no outlook and while the data are not trusted.",
            "experiment",
            "variant"),
    ADJUSTED_DIFFERENCE(
            "tallyward_adjusted_difference",
            Kind.GAUGE,
            "Difference of rates adjusted for the looks taken; absent until a final verdict is told.",
            "experiment",
            "variant"),
    ADJUSTED_DIFFERENCE_LOWER(
            "tallyward_adjusted_difference_lower",
            Kind.GAUGE,
            "Lower end of its confidence interval; absent until a final verdict is told, or when unbounded.",
            "experiment",
            "variant"),
    ADJUSTED_DIFFERENCE_UPPER(
            "tallyward_adjusted_difference_upper",
            Kind.GAUGE,
            "Upper end of its confidence interval; absent until a final verdict is told, or when unbounded.",
            "experiment",
            "variant"),

    VERDICT("tallyward_verdict", Kind.GAUGE, "1 for the verdict that holds, else 0.", "experiment", "state"),
    COMPARISON_VERDICT(
            "tallyward_comparison_verdict",
            Kind.GAUGE,
            "1 for the verdict that holds for a variant against the control, else 0.",
            "experiment",
            "variant",
            "state"),
    TRUST("tallyward_trust", Kind.GAUGE, "1 for the state of trust that holds, else 0.", "experiment", "state"),
    HELD("tallyward_held", Kind.GAUGE, "1 while a verdict waits for trust to return, else 0.", "experiment"),
    SPLIT_P_VALUE(
            "tallyward_split_p_value",
            Kind.GAUGE,
            "Sequentially valid p-value of the planned split; absent before the first trial.",
            "experiment"),
    VARIANTS_UNPUBLISHED(
            "tallyward_variants_unpublished",
            Kind.GAUGE,
            "Variants left out of the series by variant, because there are too many; 0 is right."),

    COMMITS("tallyward_commits_total", Kind.COUNTER, "Transactions committed by a group of shards.", "group"),
    ABORTS("tallyward_aborts_total", Kind.COUNTER, "Transactions aborted by a group of shards.", "group"),
    RESTORE(
            "tallyward_restore_duration_seconds",
            Kind.GAUGE,
            "Duration of the latest restore of a group's state; absent before the first has ended.",
            "group"),
    RESTORE_WAITING(
            "tallyward_restore_waiting_partitions",
            Kind.GAUGE,
            "Partitions here whose state is not restored.",
            "group"),
    RESTORE_REMAINING(
            "tallyward_restore_remaining_records",
            Kind.GAUGE,
            "State records still to be read by the restores that have begun, at most.",
            "group"),
    REACHED(
            "tallyward_broker_reached",
            Kind.GAUGE,
            "Whether a group of shards can do all of its work with the broker.",
            "group"),

    PLAN_TROUBLES(
            "tallyward_plan_troubles",
            Kind.GAUGE,
            "Problems of plan files here, and plans in them that are not the ones that stand."),
    WEBHOOK_ATTEMPTS("tallyward_webhook_attempts_total", Kind.COUNTER, "Webhook requests sent."),
    WEBHOOK_FAILURES("tallyward_webhook_failures_total", Kind.COUNTER, "Webhook requests that did not succeed."),
    WEBHOOK_PENDING("tallyward_webhook_pending", Kind.GAUGE, "Notices not yet delivered."),
    WEBHOOK_OLDEST(
            "tallyward_webhook_oldest_pending_age_seconds",
            Kind.GAUGE,
            "Age of the oldest notice not yet delivered; absent when there is none."),
    WEBHOOK_PARKED("tallyward_webhook_parked", Kind.GAUGE, "Notices that were given up and wait for a person.");

    private final String published;
    private final Kind kind;
    private final String help;
    private final List<String> labels;

    Metric(String published, Kind kind, String help, String... labels) {
        this.published = published;
        this.kind = kind;
        this.help = help;
        this.labels = List.of(labels);
    }

    /** The name in the exposition, as in {@code tallyward_z}. */
    String published() {
        return published;
    }

    Kind kind() {
        return kind;
    }

    String help() {
        return help;
    }

    /** Names of the labels in their order. */
    List<String> labels() {
        return labels;
    }

    /** How a value moves. */
    enum Kind {
        /** It never falls while the process lives. */
        COUNTER,
        /** It rises and falls. */
        GAUGE
    }
}
