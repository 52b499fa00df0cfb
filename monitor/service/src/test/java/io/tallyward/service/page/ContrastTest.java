package io.tallyward.service.page;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.regex.Matcher;
import java.util.regex.Pattern;
import org.junit.jupiter.api.Test;

/** Oracle: WCAG 2.2, success criterion 1.4.3 and its definitions of contrast ratio and relative luminance. */
class ContrastTest {

    private static final double LEAST = 4.5;

    private static final List<String> TEXTS =
            List.of("ink", "soft", "link", "benefit", "harm", "alarm", "advice", "plain");

    @Test
    void isLegibleByDayAndNight() {
        String[] schemes = Pages.styleSheet().split("@media \\(prefers-color-scheme: dark\\)");
        Map<String, String> light = colours(schemes[0]);
        Map<String, String> dark = new HashMap<>(light);
        dark.putAll(colours(schemes[1]));
        for (Map<String, String> scheme : List.of(light, dark)) {
            for (String text : TEXTS) {
                for (String surface : List.of("paper", "sheet")) {
                    assertContrast(scheme, text, surface);
                }
            }
            assertContrast(scheme, "ink", "alarm-sheet");
            assertContrast(scheme, "alarm", "alarm-sheet");
            assertContrast(scheme, "benefit", "inside");
            assertContrast(scheme, "harm", "inside");
        }
    }

    @Test
    void knowsTheExtremes() {
        assertEquals(21, contrast("#000000", "#ffffff"), 1e-9);
        assertEquals(1, contrast("#777777", "#777777"), 1e-9);
    }

    private static void assertContrast(Map<String, String> scheme, String text, String surface) {
        double contrast = contrast(scheme.get(text), scheme.get(surface));
        assertTrue(contrast >= LEAST, text + " on " + surface + ": " + contrast + " (expected: 4.5 or more)");
    }

    private static Map<String, String> colours(String css) {
        Map<String, String> colours = new HashMap<>();
        Matcher matcher = Pattern.compile("--([a-z-]+): (#[0-9a-f]{6});").matcher(css);
        while (matcher.find()) {
            colours.putIfAbsent(matcher.group(1), matcher.group(2));
        }
        return colours;
    }

    private static double contrast(String one, String other) {
        double a = luminance(one) + 0.05;
        double b = luminance(other) + 0.05;
        return Math.max(a, b) / Math.min(a, b);
    }

    private static double luminance(String colour) {
        double[] weights = {0.2126, 0.7152, 0.0722};
        double sum = 0;
        for (int i = 0; i < 3; i++) {
            double channel = Integer.parseInt(colour.substring(1 + 2 * i, 3 + 2 * i), 16) / 255.0;
            sum += weights[i] * (channel <= 0.04045 ? channel / 12.92 : Math.pow((channel + 0.055) / 1.055, 2.4));
        }
        return sum;
    }
}
