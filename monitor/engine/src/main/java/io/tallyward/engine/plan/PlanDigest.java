package io.tallyward.engine.plan;

import io.tallyward.engine.digest.Digest;
import java.util.Map;
import java.util.TreeMap;

/** Names a plan by its meaning: equal plans have equal digests whatever their files look like. */
public final class PlanDigest {

    private PlanDigest() {}

    /** SHA-256 over every field of the plan in a fixed order, as 64 hexadecimal digits. */
    public static String of(Plan plan) {
        Digest digest = new Digest("plan/2");
        digest.text(plan.experiment()).text(plan.question()).text(plan.owner());
        CountRule count = plan.count();
        digest.text(count.by().name())
                .number(count.attribution().toMillis())
                .number(count.grace().toMillis())
                .number(count.window().toMillis());
        digest.number(plan.variants().size());
        for (Variant variant : plan.variants()) {
            digest.text(variant.name()).real(variant.share()).number(variant.control() ? 1 : 0);
        }
        addTest(digest, plan.test());
        addLooks(digest, plan.looks());
        digest.text(plan.futility().map(FutilityPlan::code).orElse("none"));
        addSplitCheck(digest, plan.splitCheck());
        digest.real(plan.trust().crossoverShare())
                .real(plan.trust().lateShare())
                .number(plan.trust().starvedAfter().toMillis());
        addOrphanGap(digest, plan.trust().orphanGap());
        digest.number(plan.run().from().toEpochMilli())
                .number(plan.run().atLeast().toMillis())
                .number(plan.run().atMost().toMillis());
        digest.number(plan.epochs().size());
        for (AllocationEpoch epoch : plan.epochs()) {
            digest.number(epoch.from().toEpochMilli());
            for (Map.Entry<String, Double> share : new TreeMap<>(epoch.shares()).entrySet()) {
                digest.text(share.getKey()).real(share.getValue());
            }
        }
        return digest.hex();
    }

    /** A plan with the usual gap has the digest that it had before there was any. */
    private static void addOrphanGap(Digest digest, double gap) {
        if (gap != TrustLimits.DEFAULT_ORPHAN_GAP) {
            digest.text("orphan-gap").real(gap);
        }
    }

    /** A plan without segments has the digest that it had before there were any. */
    private static void addSplitCheck(Digest digest, SplitCheckPlan splitCheck) {
        digest.real(splitCheck.alpha());
        if (!splitCheck.segments().isEmpty()) {
            digest.text("segments").number(splitCheck.segments().size());
            splitCheck.segments().forEach(digest::text);
        }
    }

    private static void addTest(Digest digest, TestPlan test) {
        addTail(digest, test.benefit());
        digest.number(test.harm().isPresent() ? 1 : 0);
        test.harm().ifPresent(harm -> addTail(digest, harm));
        digest.text(test.sharing().name())
                .text(test.clock().name())
                .text(test.measure().name())
                .real(test.power())
                .real(test.baseline())
                .real(test.smallestEffect())
                .text(test.better().name())
                .number(test.minimumPerCell());
    }

    private static void addTail(Digest digest, Tail tail) {
        digest.real(tail.alpha()).text(tail.spending().code()).real(tail.silentBefore());
    }

    private static void addLooks(Digest digest, LookSchedule looks) {
        if (looks instanceof LookSchedule.Every every) {
            digest.text("every").number(every.interval().toMillis());
        } else if (looks instanceof LookSchedule.AtFractions fractions) {
            digest.text("fractions").number(fractions.fractions().size());
            fractions.fractions().forEach(digest::real);
        }
    }
}
