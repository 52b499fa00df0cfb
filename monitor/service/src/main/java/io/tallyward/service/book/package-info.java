/** The book of plans at run time: what the files propose, what stands, and who has to know. */
package io.tallyward.service.book;
