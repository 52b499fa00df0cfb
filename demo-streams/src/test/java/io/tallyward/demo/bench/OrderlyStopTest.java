package io.tallyward.demo.bench;

import static org.junit.jupiter.api.Assertions.assertFalse;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.util.concurrent.CountDownLatch;
import org.junit.jupiter.api.Test;
import org.junit.jupiter.api.Timeout;

@Timeout(60)
class OrderlyStopTest {

    @Test
    void interruptsTheMeasurementAndWaitsForItsEnd() throws InterruptedException {
        OrderlyStop stop = OrderlyStop.listen();
        Thread signal = new Thread(stop::stop);
        signal.start();
        boolean interrupted = false;
        try {
            new CountDownLatch(1).await();
        } catch (InterruptedException expected) {
            interrupted = true;
        }
        assertTrue(interrupted && stop.happened());
        assertTrue(signal.isAlive(), "waits until all is tidied up");
        stop.close();
        signal.join();
    }

    @Test
    void leavesAThreadAloneThatHasEndedItsMeasurement() {
        OrderlyStop stop = OrderlyStop.listen();
        stop.close();
        stop.stop();
        assertFalse(stop.happened());
        assertFalse(Thread.interrupted());
    }
}
