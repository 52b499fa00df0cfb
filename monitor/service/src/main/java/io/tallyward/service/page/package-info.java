/**
 * The pages people read: an overview and one page per experiment, rendered on the server without outside help. All text
 * reaches a page through {@link io.tallyward.service.page.Markup}, which escapes it; there is no other way in.
 */
package io.tallyward.service.page;
