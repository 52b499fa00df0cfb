package io.tallyward.service.config;

import java.net.Inet6Address;
import java.net.InetAddress;
import java.net.UnknownHostException;

/**
 * Hosts of a URL that are written as an address. What a name stands for may change, so it is judged at the time of
 * delivery, and by a longer table; an address that cannot be right is better told before the start.
 */
final class LiteralHost {

    private LiteralHost() {}

    /**
     * Whether a host is an address, not a name, that is unspecified, loopback, link-local or private (RFC 1918, RFC 4193
     * and the site-local addresses that the latter replaces).
     *
     * @param host as {@link java.net.URI#getHost()} gives it: IPv6 in brackets, perhaps with a zone
     */
    static boolean isPrivate(String host) {
        boolean six = host.startsWith("[");
        if (!six && !host.matches("[0-9.]+")) {
            return false;
        }
        try {
            // A literal is parsed, not looked up. Its zone names an interface that this machine need not have.
            InetAddress address = InetAddress.getByName(
                    six ? host.substring(1, host.length() - 1).replaceFirst("%.*", "") : host);
            return address.isAnyLocalAddress()
                    || address.isLoopbackAddress()
                    || address.isLinkLocalAddress()
                    || address.isSiteLocalAddress()
                    || isUniqueLocal(address);
        } catch (UnknownHostException e) {
            return false;
        }
    }

    /** {@code fc00::/7}. */
    private static boolean isUniqueLocal(InetAddress address) {
        return address instanceof Inet6Address && (address.getAddress()[0] & 0xfe) == 0xfc;
    }
}
