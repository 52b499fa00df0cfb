/**
 * What tests of several modules share: a clock that moves when the test moves it, and a real broker to test against. The
 * broker is a container where a Docker engine answers and a node inside the test's own process elsewhere, so that the same
 * tests run everywhere; each run says in one line which of the two it used.
 */
package io.tallyward.testkit;
