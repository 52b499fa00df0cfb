package io.tallyward.demo.bench;

/** How an instance that was killed is started again. */
enum RestartWay {
    /** As one that the group has never seen. */
    NEW_MEMBER("new member", false, false),

    /** Under a name it keeps. */
    KEPT_NAME("kept name", true, false),

    /** Under a name it keeps, its classes read from an archive. */
    KEPT_NAME_AND_ARCHIVE("kept name, class archive", true, true);

    private final String words;
    private final boolean named;
    private final boolean archived;

    RestartWay(String words, boolean named, boolean archived) {
        this.words = words;
        this.named = named;
        this.archived = archived;
    }

    String words() {
        return words;
    }

    boolean named() {
        return named;
    }

    boolean archived() {
        return archived;
    }
}
