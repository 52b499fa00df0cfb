package io.tallyward.demo.story;

import java.util.SplittableRandom;

/** What a visitor uses. It becomes the source and the segments of the visitor's events. */
public enum Device {
    WEB("web", "browser", "site", 0.35),
    ANDROID_OLD("app", "android", "6.2", 0.15),
    IOS_OLD("app", "ios", "6.2", 0.15),
    ANDROID_NEW("app", "android", "6.3", 0.15),
    IOS_NEW("app", "ios", "6.3", 0.20);

    private final String source;
    private final String platform;
    private final String version;
    private final double share;

    Device(String source, String platform, String version, double share) {
        this.source = source;
        this.platform = platform;
        this.version = version;
        this.share = share;
    }

    /** The emitter of the events. */
    public String source() {
        return source;
    }

    /** Value of the segment {@code platform}. */
    public String platform() {
        return platform;
    }

    /** Value of the segment {@code version}. */
    public String version() {
        return version;
    }

    /** Share of the visitors who use it, in (0, 1). */
    public double share() {
        return share;
    }

    static Device draw(SplittableRandom random) {
        double point = random.nextDouble();
        double upTo = 0;
        for (Device device : values()) {
            upTo += device.share;
            if (point < upTo) {
                return device;
            }
        }
        return IOS_NEW;
    }
}
