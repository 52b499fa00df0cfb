package io.tallyward.engine.decide;

import io.tallyward.statistics.proportion.StratifiedComparison;
import io.tallyward.statistics.proportion.Stratum;
import java.util.List;

/**
 * What a look finds on the table.
 *
 * @param strata the counts of challenger and control, one stratum per allocation epoch
 * @param found their comparison
 * @param fraction information relative to the planned maximum
 * @param windowEnd event time of the look, milliseconds since the epoch
 * @param time moment on the spending clock, in [0, 1]; 1 at the last look
 * @param benefitOpen whether the minimum run is over
 * @param last whether no look follows
 * @param again whether nothing has come in since the look before: that look once more, as the last
 */
record Sitting(
        List<Stratum> strata,
        StratifiedComparison found,
        double fraction,
        long windowEnd,
        double time,
        boolean benefitOpen,
        boolean last,
        boolean again) {

    Sitting {
        strata = List.copyOf(strata);
    }
}
