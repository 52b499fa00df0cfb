package io.tallyward;

import static com.tngtech.archunit.lang.syntax.ArchRuleDefinition.classes;
import static com.tngtech.archunit.lang.syntax.ArchRuleDefinition.noClasses;
import static com.tngtech.archunit.library.dependencies.SlicesRuleDefinition.slices;

import com.tngtech.archunit.core.importer.ImportOption;
import com.tngtech.archunit.junit.AnalyzeClasses;
import com.tngtech.archunit.junit.ArchTest;
import com.tngtech.archunit.lang.ArchRule;

/** The dependency rule: statistics, engine, connectors, service; it never turns back. */
@AnalyzeClasses(packages = "io.tallyward", importOptions = ImportOption.DoNotIncludeTests.class)
class ArchitectureTest {

    @ArchTest
    static final ArchRule statisticsKnowOnlyTheJdkAndCommonsMath = classes()
            .that()
            .resideInAPackage("io.tallyward.statistics..")
            .should()
            .onlyDependOnClassesThat()
            .resideInAnyPackage("io.tallyward.statistics..", "java..", "org.apache.commons.math3..");

    @ArchTest
    static final ArchRule theEngineKnowsOnlyTheJdkAndTheStatistics = classes()
            .that()
            .resideInAPackage("io.tallyward.engine..")
            .should()
            .onlyDependOnClassesThat()
            .resideInAnyPackage("io.tallyward.engine..", "io.tallyward.statistics..", "java..", "javax.crypto..");

    @ArchTest
    static final ArchRule theCoreDoesNoInputOrOutputAndReadsNoClock = noClasses()
            .that()
            .resideInAnyPackage("io.tallyward.statistics..", "io.tallyward.engine..")
            .should()
            .dependOnClassesThat()
            .resideInAnyPackage("java.net..", "java.nio.file..", "java.nio.channels..", "java.util.concurrent..")
            .orShould()
            .dependOnClassesThat()
            .haveNameMatching("java\\.io\\.(File.*|RandomAccessFile|Console)")
            .orShould()
            .dependOnClassesThat()
            .haveNameMatching("java\\.time\\.(Clock|InstantSource)")
            .orShould()
            .callMethod(System.class, "currentTimeMillis")
            .orShould()
            .callMethod(System.class, "nanoTime")
            .orShould()
            .callMethod(java.time.Instant.class, "now")
            .orShould()
            .dependOnClassesThat()
            .areAssignableTo(java.util.Random.class)
            .orShould()
            .dependOnClassesThat()
            .areAssignableTo(Thread.class);

    @ArchTest
    static final ArchRule noConnectorSeesAnother =
            slices().matching("io.tallyward.connector.(*)..").should().notDependOnEachOther();

    @ArchTest
    static final ArchRule connectorsDoNotKnowTheService = noClasses()
            .that()
            .resideInAPackage("io.tallyward.connector..")
            .should()
            .dependOnClassesThat()
            .resideInAPackage("io.tallyward.service..");

    @ArchTest
    static final ArchRule connectorsHoldNoStatistics = noClasses()
            .that()
            .resideInAPackage("io.tallyward.connector..")
            .should()
            .dependOnClassesThat()
            .resideInAPackage("io.tallyward.statistics..");

    @ArchTest
    static final ArchRule packagesOfTheEngineFormNoCycle =
            slices().matching("io.tallyward.engine.(*)..").should().beFreeOfCycles();

    @ArchTest
    static final ArchRule packagesOfTheStatisticsFormNoCycle =
            slices().matching("io.tallyward.statistics.(*)..").should().beFreeOfCycles();

    @ArchTest
    static final ArchRule packagesOfTheServiceFormNoCycle =
            slices().matching("io.tallyward.service.(*)..").should().beFreeOfCycles();

    @ArchTest
    static final ArchRule onlyOneClassKnowsTheMetricsRegistry = noClasses()
            .that()
            .haveNameNotMatching("io\\.tallyward\\.service\\.metrics\\.PrometheusExposition.*")
            .should()
            .dependOnClassesThat()
            .resideInAnyPackage("io.prometheus..", "io.micrometer.prometheus..");
}
