/** Digests over the meaning of values, independent of how they are rendered as text. */
package io.tallyward.engine.digest;
