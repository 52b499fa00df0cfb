/**
 * The program: {@link io.tallyward.service.Tallyward} hands the running service to the command line and the signals of the
 * process to the service. What it is configured with, what it serves and how it runs are the packages below.
 */
package io.tallyward.service;
