package io.tallyward.connector.webhook;

import java.net.Inet4Address;
import java.net.InetAddress;
import java.net.UnknownHostException;
import java.util.ArrayList;
import java.util.List;
import java.util.Optional;

/**
 * Which addresses a notice may be sent to. A URL that somebody configures, or a name that somebody else resolves, must not
 * make the monitor talk to its own host, its neighbours or a cloud's metadata service. The table follows the IANA
 * special-purpose address registries (RFC 6890 and its updates); addresses that carry an IPv4 address inside (mapped,
 * compatible, NAT64, 6to4) are judged by what they carry.
 */
final class AddressRule {

    private record Block(byte[] prefix, int bits, String what) {

        boolean contains(byte[] address) {
            if (address.length != prefix.length) {
                return false;
            }
            for (int bit = 0; bit < bits; bit++) {
                int mask = 0x80 >> (bit % 8);
                if (((address[bit / 8] ^ prefix[bit / 8]) & mask) != 0) {
                    return false;
                }
            }
            return true;
        }
    }

    private static final String[][] REFUSED = {
        {"0.0.0.0/8", "unspecified"},
        {"10.0.0.0/8", "private"},
        {"100.64.0.0/10", "shared by carriers"},
        {"127.0.0.0/8", "loopback"},
        {"168.63.129.16/32", "a metadata service"},
        {"169.254.0.0/16", "link-local, metadata services included"},
        {"172.16.0.0/12", "private"},
        {"192.0.0.0/24", "reserved"},
        {"192.0.2.0/24", "documentation"},
        {"192.88.99.0/24", "reserved"},
        {"192.168.0.0/16", "private"},
        {"198.18.0.0/15", "benchmarking"},
        {"198.51.100.0/24", "documentation"},
        {"203.0.113.0/24", "documentation"},
        {"224.0.0.0/4", "multicast"},
        {"240.0.0.0/4", "reserved"},
        {"::/128", "unspecified"},
        {"::1/128", "loopback"},
        {"64:ff9b:1::/48", "private"},
        {"100::/64", "discarded"},
        {"2001::/32", "a tunnel"},
        {"2001:db8::/32", "documentation"},
        {"3fff::/20", "documentation"},
        {"5f00::/16", "reserved"},
        {"fc00::/7", "private, metadata services included"},
        {"fe80::/10", "link-local"},
        {"fec0::/10", "private"},
        {"ff00::/8", "multicast"},
    };

    private static final List<Block> BLOCKS = blocks();
    private static final Block COMPATIBLE = block("::/96", "");
    private static final Block NAT64 = block("64:ff9b::/96", "");
    private static final Block SIX_TO_FOUR = block("2002::/16", "");

    private AddressRule() {}

    /** Why an address is not of the public internet, in words; empty if it is. */
    static Optional<String> refusal(InetAddress address) {
        byte[] bytes = address.getAddress();
        Optional<String> refusal = BLOCKS.stream()
                .filter(block -> block.contains(bytes))
                .map(Block::what)
                .findFirst();
        if (refusal.isPresent() || address instanceof Inet4Address) {
            return refusal;
        }
        if (COMPATIBLE.contains(bytes) || NAT64.contains(bytes)) {
            return refusal(carried(bytes, 12));
        }
        return SIX_TO_FOUR.contains(bytes) ? refusal(carried(bytes, 2)) : Optional.empty();
    }

    private static InetAddress carried(byte[] bytes, int from) {
        return address(new byte[] {bytes[from], bytes[from + 1], bytes[from + 2], bytes[from + 3]});
    }

    private static InetAddress address(byte[] bytes) {
        try {
            return InetAddress.getByAddress(bytes);
        } catch (UnknownHostException e) {
            throw new IllegalStateException("an address of " + bytes.length + " bytes", e);
        }
    }

    private static List<Block> blocks() {
        List<Block> blocks = new ArrayList<>();
        for (String[] row : REFUSED) {
            blocks.add(block(row[0], row[1]));
        }
        return List.copyOf(blocks);
    }

    private static Block block(String range, String what) {
        int slash = range.indexOf('/');
        try {
            // A literal is parsed, not looked up.
            byte[] prefix = InetAddress.getByName(range.substring(0, slash)).getAddress();
            return new Block(prefix, Integer.parseInt(range.substring(slash + 1)), what);
        } catch (UnknownHostException e) {
            throw new IllegalStateException("not an address literal: " + range, e);
        }
    }
}
