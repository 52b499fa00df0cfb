/**
 * The command line. Each command reads its input as a whole, says everything that is wrong with it in sentences, and ends
 * with a code that a script can rely on: {@link io.tallyward.service.command.ExitCode}. People get tables; with {@code
 * --json} every line of standard output is one JSON object with a {@code type}, problems included.
 *
 * <p>Commands hold no rules of their own. What a plan means comes from the engine, what an event is from the format
 * connector; a replay drives the very shards that the service drives.
 */
package io.tallyward.service.command;
