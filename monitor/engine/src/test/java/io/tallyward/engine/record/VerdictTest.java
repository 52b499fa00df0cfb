package io.tallyward.engine.record;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertThrows;

import java.util.Arrays;
import java.util.List;
import java.util.stream.Collectors;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.EnumSource;

class VerdictTest {

    private static String next(Verdict verdict) {
        return Arrays.stream(Verdict.values())
                .filter(verdict::mayBecome)
                .map(Verdict::code)
                .collect(Collectors.joining(" "));
    }

    @Test
    void anOpenVerdictGoesForwardOnly() {
        assertEquals("waiting continue stop-benefit stop-harm stop-futility exhausted stopped", next(Verdict.WAITING));
        assertEquals("continue stop-benefit stop-harm stop-futility exhausted stopped", next(Verdict.CONTINUE));
    }

    @ParameterizedTest
    @EnumSource(
            value = Verdict.class,
            names = {"WAITING", "CONTINUE"},
            mode = EnumSource.Mode.EXCLUDE)
    void aFinalVerdictStands(Verdict verdict) {
        assertEquals(verdict.code(), next(verdict));
        for (Verdict other : List.of(Verdict.WAITING, Verdict.CONTINUE)) {
            assertThrows(IllegalStateException.class, () -> verdict.become(other));
        }
        assertEquals(verdict, verdict.become(verdict));
    }
}
