package io.tallyward.engine;

import io.tallyward.engine.shard.StateChange;
import java.util.ArrayList;
import java.util.HashMap;
import java.util.List;
import java.util.Map;
import java.util.function.BiConsumer;

/**
 * The durable log of one shard as a compacted topic keeps it: all changes in order, of which compaction may drop any that a
 * later change of the same key supersedes, from the oldest on, and removals themselves.
 */
public final class StateLog {

    private final List<StateChange> changes = new ArrayList<>();

    public void append(List<StateChange> added) {
        changes.addAll(added);
    }

    public List<StateChange> changes() {
        return List.copyOf(changes);
    }

    /** Replays every change ever written. */
    public void replay(BiConsumer<byte[], byte[]> restore) {
        changes.forEach(change -> restore.accept(change.key(), change.value()));
    }

    /** Replays what is left when the first {@code cleaned} changes have been compacted and their removals dropped. */
    public void replayCompacted(int cleaned, BiConsumer<byte[], byte[]> restore) {
        Map<String, Integer> lastWrites = new HashMap<>();
        for (int i = 0; i < cleaned; i++) {
            lastWrites.put(name(changes.get(i)), i);
        }
        for (int i = 0; i < changes.size(); i++) {
            StateChange change = changes.get(i);
            boolean survives = i >= cleaned || (lastWrites.get(name(change)) == i && change.value() != null);
            if (survives) {
                restore.accept(change.key(), change.value());
            }
        }
    }

    /** Shows the last changes. */
    public void last(int most, BiConsumer<byte[], byte[]> taker) {
        changes.subList(Math.max(0, changes.size() - most), changes.size())
                .forEach(change -> taker.accept(change.key(), change.value()));
    }

    /** The live entries: what is left when everything has been compacted. */
    public List<StateChange> live() {
        List<StateChange> live = new ArrayList<>();
        replayCompacted(changes.size(), (key, value) -> live.add(new StateChange(key, value)));
        return live;
    }

    public int size() {
        return changes.size();
    }

    private static String name(StateChange change) {
        return java.util.HexFormat.of().formatHex(change.key());
    }
}
