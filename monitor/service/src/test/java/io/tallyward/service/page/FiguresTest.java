package io.tallyward.service.page;

import static org.junit.jupiter.api.Assertions.assertEquals;

import org.junit.jupiter.api.Test;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.CsvSource;

class FiguresTest {

    @ParameterizedTest
    @CsvSource({
        "1, 1.0",
        "0.887, 0.89",
        "0.05, 0.050",
        "0.00016, 0.00016",
        "0.0000041, 4.1e-06",
        "1e-99, 1.0e-99",
        "9.9e-100, below 1e-99",
        "0, below 1e-99"
    })
    void writesPValuesWithTwoSignificantDigits(double value, String expected) {
        assertEquals(expected, Figures.pValue(value));
    }

    @Test
    void writesSpentAlphaLikeAPValueUnlessNoneIsSpent() {
        assertEquals("0.013", Figures.probability(0.0128));
        assertEquals("0", Figures.probability(0));
        assertEquals(Figures.NONE, Figures.probability(Double.NaN));
    }

    @ParameterizedTest
    @CsvSource(
            delimiter = '|',
            value = {
                "z -4.827 has reached the harm boundary -3.360|z −4.827 has reached the harm boundary −3.360",
                "z 1.200 lies between the boundaries|z 1.200 lies between the boundaries",
                "(sequential p-value 4.1e-09, limit 0.0010)|(sequential p-value 4.1e-09, limit 0.0010)",
                "(sequential p-value 2.3e-140, limit 0.0010)|(sequential p-value below 1e-99, limit 0.0010)",
                "(sequential p-value 0.0, limit 0.0010)|(sequential p-value below 1e-99, limit 0.0010)",
                "no trial of wide-2 for 3.0 h since 2026-05-06|no trial of wide-2 for 3.0 h since 2026-05-06"
            })
    void writesTheNumbersOfReasonsAsThoseOfThePage(String reason, String expected) {
        assertEquals(expected, Figures.prose(reason));
    }
}
