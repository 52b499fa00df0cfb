package io.tallyward.connector.format;

import com.fasterxml.jackson.core.io.SerializedString;
import java.util.HashMap;
import java.util.Map;

/**
 * The members of one kind of object in the order in which they came last. The documents of a stream nearly always have the
 * same members in the same order, and a parser that is told which name to expect compares bytes instead of looking it up.
 * An expectation may be wrong; it is then replaced. Not thread-safe.
 */
final class MemberOrder {

    /** Names that no pointer mentions are learnt as well, but names come from outside: only so many of them. */
    private static final int MOST_NAMES = 64;

    /** Nor is a name learnt that is long. */
    private static final int LONGEST_NAME = 64;

    private static final Member UNKNOWN = new Member("", null);

    private final PointerTree node;
    private final Map<String, Member> known = new HashMap<>();
    private final Member start = new Member("", null);

    /** @param node where in the document the object is */
    MemberOrder(PointerTree node) {
        this.node = node;
    }

    /** A name, where it leads, and what was last seen to follow it. */
    static final class Member {
        private final SerializedString name;
        private final PointerTree node;
        private final MemberOrder below;
        private Member next;

        private Member(String name, PointerTree node) {
            this.name = new SerializedString(name);
            this.node = node;
            below = node == null ? null : new MemberOrder(node);
        }

        SerializedString name() {
            return name;
        }

        /** Null when no pointer leads here. */
        PointerTree node() {
            return node;
        }

        /** The members of the value, where pointers lead on. */
        MemberOrder below() {
            return below;
        }

        /** The member to expect after this one; null when there is none. */
        Member next() {
            return next;
        }
    }

    /** Stands before the first member. */
    Member start() {
        return start;
    }

    /** The member of a name that was not expected; it will be expected next time. */
    Member follow(Member before, String name) {
        Member found = known.get(name);
        if (found == null) {
            PointerTree child = node.child(name);
            if (child == null && (known.size() >= MOST_NAMES || name.length() > LONGEST_NAME)) {
                return UNKNOWN;
            }
            found = new Member(name, child);
            known.put(name, found);
        }
        if (before != UNKNOWN) {
            before.next = found;
        }
        return found;
    }
}
