package io.tallyward.engine.record;

import io.tallyward.engine.digest.Digest;
import io.tallyward.engine.plan.Amendment;
import io.tallyward.engine.plan.Plan;
import io.tallyward.engine.plan.PlanDigest;
import io.tallyward.engine.record.DecisionRecord.Comparison;
import io.tallyward.engine.record.DecisionRecord.Split;
import io.tallyward.engine.record.DecisionRecord.VariantCount;
import io.tallyward.engine.record.SplitOrigin.PlannedUnits;
import io.tallyward.engine.record.SplitOrigin.SegmentSplit;
import java.util.List;
import java.util.TreeMap;

/** The digest that chains decision records: it covers every field of a record but the digest itself. */
public final class RecordDigest {

    private RecordDigest() {}

    /** SHA-256 over the meaning of a record, as 64 hexadecimal digits; the record's own {@code hash} is left out. */
    public static String of(DecisionRecord record) {
        Digest digest = new Digest("decision/4");
        digest.text(record.experiment())
                .number(record.sequence())
                .text(record.occasion().code())
                .number(record.windowEnd().toEpochMilli())
                .text(record.planDigest());
        add(digest, record.plan());
        add(digest, record.amendment());
        digest.number(record.counts().size());
        for (VariantCount count : record.counts()) {
            digest.number(count.epoch())
                    .text(count.variant())
                    .number(count.trials())
                    .number(count.successes());
            add(digest, count.unitTotals());
        }
        long[] orphans = record.outcomes().orphansByVariant();
        digest.number(orphans.length);
        for (long orphan : orphans) {
            digest.number(orphan);
        }
        for (long outcome : record.outcomes().toArray()) {
            digest.number(outcome);
        }
        digest.number(record.idleSealed());
        add(digest, record.split());
        digest.text(record.trust().code()).text(record.trustReason());
        add(digest, record.silence());
        digest.text(record.verdict().code());
        digest.number(record.comparisons().size());
        record.comparisons().forEach(comparison -> add(digest, comparison));
        digest.text(record.engineVersion()).text(record.previous());
        return digest.hex();
    }

    /** The same record with its digest filled in. */
    public static DecisionRecord seal(DecisionRecord record) {
        return record.chained(record.previous(), of(record));
    }

    private static void add(Digest digest, Plan plan) {
        if (present(digest, plan)) {
            digest.text(PlanDigest.of(plan)).number(plan.amendments().size());
            plan.amendments().forEach(amendment -> add(digest, amendment));
        }
    }

    private static void add(Digest digest, Amendment amendment) {
        if (present(digest, amendment)) {
            digest.number(amendment.at().toEpochMilli()).text(amendment.reason());
            Amendment.Change change = amendment.change();
            if (change instanceof Amendment.End other) {
                digest.text("end").number(other.end().toEpochMilli());
            } else if (change instanceof Amendment.Shares other) {
                digest.text("shares").number(other.shares().size());
                new TreeMap<>(other.shares())
                        .forEach((variant, share) -> digest.text(variant).real(share));
            } else {
                digest.text("stop");
            }
        }
    }

    private static void add(Digest digest, Silence silence) {
        if (present(digest, silence)) {
            digest.text(silence.variant())
                    .number(silence.since().toEpochMilli())
                    .number(silence.due());
        }
    }

    private static void add(Digest digest, SplitPeak peak) {
        if (present(digest, peak)) {
            digest.real(peak.logBayesFactor()).number(peak.units().size());
            for (SplitPeak.EpochUnits units : peak.units()) {
                digest.number(units.epoch()).text(units.variant()).number(units.units());
            }
        }
    }

    private static void add(Digest digest, Split split) {
        digest.real(split.logBayesFactor())
                .real(split.sequentialPValue())
                .real(split.pearsonChiSquare())
                .number(split.pearsonDegreesOfFreedom())
                .real(split.pearsonPValue());
        add(digest, split.peak());
        add(digest, split.origin());
    }

    private static void add(Digest digest, SplitOrigin origin) {
        if (present(digest, origin)) {
            digest.number(origin.epoch())
                    .number(origin.beganFrom().toEpochMilli())
                    .number(origin.beganUntil().toEpochMilli())
                    .real(origin.logLikelihoodGain());
            add(digest, origin.since());
            add(digest, origin.worst());
        }
    }

    private static void add(Digest digest, SegmentSplit segment) {
        if (present(digest, segment)) {
            digest.text(segment.field()).text(segment.value());
            add(digest, segment.units());
            add(digest, segment.elsewhere());
            digest.real(segment.chiSquare())
                    .real(segment.adjustedPValue())
                    .real(segment.contrastPValue())
                    .number(segment.judged())
                    .number(segment.standsOut() ? 1 : 0);
        }
    }

    private static void add(Digest digest, List<PlannedUnits> variants) {
        digest.number(variants.size());
        for (PlannedUnits variant : variants) {
            digest.text(variant.variant()).real(variant.planned()).number(variant.units());
        }
    }

    private static void add(Digest digest, Comparison comparison) {
        digest.text(comparison.variant())
                .number(comparison.look())
                .real(comparison.z())
                .real(comparison.information())
                .real(comparison.informationFraction())
                .real(comparison.spendingTime())
                .real(comparison.level())
                .real(comparison.alphaSpent())
                .optional(comparison.upper())
                .optional(comparison.lower())
                .optional(comparison.futility())
                .real(comparison.difference())
                .optional(comparison.differenceLower())
                .optional(comparison.differenceUpper());
        add(digest, comparison.lift());
        add(digest, comparison.outlook());
        add(digest, comparison.adjusted());
        add(digest, comparison.clustering());
        digest.text(comparison.verdict().code())
                .text(comparison.held() == null ? "" : comparison.held().code())
                .text(comparison.reason());
    }

    private static void add(Digest digest, Estimated estimated) {
        if (present(digest, estimated)) {
            digest.real(estimated.value()).optional(estimated.lower()).optional(estimated.upper());
        }
    }

    private static void add(Digest digest, Outlook outlook) {
        if (present(digest, outlook)) {
            digest.real(outlook.underTrend())
                    .real(outlook.underDesign())
                    .real(outlook.withoutEffect())
                    .real(outlook.predictive());
        }
    }

    private static void add(Digest digest, Adjusted adjusted) {
        if (present(digest, adjusted)) {
            digest.real(adjusted.pValue()).real(adjusted.level());
            add(digest, adjusted.drift());
            add(digest, adjusted.difference());
            add(digest, adjusted.lift());
        }
    }

    private static void add(Digest digest, UnitTotals totals) {
        if (present(digest, totals)) {
            digest.number(totals.units())
                    .number(totals.trialSquares())
                    .number(totals.products())
                    .number(totals.successSquares());
        }
    }

    private static void add(Digest digest, Clustering clustering) {
        if (present(digest, clustering)) {
            digest.real(clustering.independentZ()).real(clustering.designEffect());
        }
    }

    private static boolean present(Digest digest, Object value) {
        digest.number(value == null ? 0 : 1);
        return value != null;
    }
}
