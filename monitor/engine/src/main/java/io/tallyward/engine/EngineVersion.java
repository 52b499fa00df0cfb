package io.tallyward.engine;

/** Version of the counting and deciding rules, written into every decision record. */
public final class EngineVersion {

    /** Rises whenever the same log would lead to different records. */
    public static final String CURRENT = "4";

    private EngineVersion() {}
}
