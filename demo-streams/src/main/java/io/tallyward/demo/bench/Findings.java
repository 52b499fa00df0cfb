package io.tallyward.demo.bench;

import java.util.List;

/** What a measurement has found, for people and for machines. */
interface Findings {

    /** A table and what is to be said about it, line by line. */
    List<String> lines();

    /** One JSON object on one line. */
    String json();
}
