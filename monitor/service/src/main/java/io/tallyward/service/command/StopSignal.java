package io.tallyward.service.command;

/** Tells when to stop. */
@FunctionalInterface
public interface StopSignal {

    /** Returns when the process has been told to stop. */
    void await() throws InterruptedException;
}
