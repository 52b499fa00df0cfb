/**
 * Reading small YAML files that people write by hand. A file becomes a tree of {@link
 * io.tallyward.service.config.document.Node nodes} that remember their lines; a {@link
 * io.tallyward.service.config.document.Shape} says which keys may stand where, of which type, with which default and why.
 * Everything that is wrong is found in one pass and reported together, each as a {@link
 * io.tallyward.service.config.document.Problem}: nothing is guessed, skipped or silently defaulted.
 *
 * <p>The reader is deliberately narrower than YAML. Anchors, aliases, tags, several documents in one file, repeated keys,
 * deep nesting and large files are refused, so that no file can expand in memory or mean something else than it shows.
 */
package io.tallyward.service.config.document;
