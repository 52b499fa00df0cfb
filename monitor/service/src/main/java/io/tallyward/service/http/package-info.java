/** The HTTP side of the monitor: read-only, small and bounded, on the loopback address unless configured otherwise. */
package io.tallyward.service.http;
