package io.tallyward.demo;

import static com.tngtech.archunit.lang.syntax.ArchRuleDefinition.noClasses;

import com.tngtech.archunit.core.importer.ImportOption.DoNotIncludeTests;
import com.tngtech.archunit.junit.AnalyzeClasses;
import com.tngtech.archunit.junit.ArchTest;
import com.tngtech.archunit.lang.ArchRule;

/** A truth that used the code it checks would be worth nothing. */
@AnalyzeClasses(packages = "io.tallyward.demo", importOptions = DoNotIncludeTests.class)
class OutsiderTest {

    @ArchTest
    static final ArchRule NOTHING_BUT_THE_BENCHMARK_KNOWS_THE_MONITOR_BUT_BY_WIRE_AND_FILE = noClasses()
            .that()
            .resideOutsideOfPackage("io.tallyward.demo.bench..")
            .should()
            .dependOnClassesThat()
            .resideInAnyPackage(
                    "io.tallyward.engine..",
                    "io.tallyward.statistics..",
                    "io.tallyward.connector..",
                    "io.tallyward.service..");
}
