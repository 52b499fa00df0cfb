package io.tallyward.demo.chaos;

/** Lets the stream through up to a number of events, so that it lasts as long as the faults do. Thread-safe. */
final class Gate {

    private long allowed;
    private long passed;

    /** Lets events up to this number through; never fewer than before. */
    synchronized void openTo(long count) {
        if (count > allowed) {
            allowed = count;
            notifyAll();
        }
    }

    /** Notes that so many events have been sent, and waits until one more may be. */
    synchronized void pass(long count) {
        passed = count;
        boolean interrupted = false;
        while (count >= allowed && !interrupted) {
            try {
                wait();
            } catch (InterruptedException e) {
                interrupted = true;
                Thread.currentThread().interrupt();
            }
        }
    }

    /** How many events have been sent. */
    synchronized long passed() {
        return passed;
    }
}
