/**
 * The demonstration: six experiments of an invented ferry operator, two weeks of their traffic in a minute and a half, a
 * real broker, the real monitor, and at the end the truth beside the verdicts. Everything runs on this machine and listens
 * on the loopback address only; broker and monitor are processes of their own, so that they can be watched, and killed,
 * like real ones.
 */
package io.tallyward.demo;
