package io.tallyward.connector.webhook;

import static org.junit.jupiter.api.Assertions.assertEquals;
import static org.junit.jupiter.api.Assertions.assertTrue;

import java.net.InetAddress;
import java.net.UnknownHostException;
import java.util.Optional;
import org.junit.jupiter.params.ParameterizedTest;
import org.junit.jupiter.params.provider.ValueSource;

/** Both edges of the ranges of the IANA special-purpose registries, and the disguises of an IPv4 address. */
class AddressRuleTest {

    @ParameterizedTest
    @ValueSource(
            strings = {
                "0.0.0.0",
                "0.255.255.255",
                "10.0.0.0",
                "10.255.255.255",
                "100.64.0.0",
                "100.100.100.200",
                "100.127.255.255",
                "127.0.0.1",
                "127.255.255.255",
                "2130706433",
                "168.63.129.16",
                "169.254.0.1",
                "169.254.169.254",
                "172.16.0.0",
                "172.31.255.255",
                "192.0.0.1",
                "192.168.0.1",
                "192.168.255.255",
                "198.18.0.1",
                "198.19.255.255",
                "203.0.113.7",
                "224.0.0.1",
                "239.255.255.255",
                "255.255.255.255",
                "[::]",
                "[::1]",
                "[::127.0.0.1]",
                "[::ffff:127.0.0.1]",
                "[::ffff:a00:1]",
                "[64:ff9b::10.0.0.1]",
                "[64:ff9b::a9fe:a9fe]",
                "[2002:7f00:1::]",
                "[2002:c0a8:101::1]",
                "[2001:0:1::1]",
                "[2001:db8::1]",
                "[fc00::1]",
                "[fd00:ec2::254]",
                "[fdff:ffff::1]",
                "[fe80::1]",
                "[febf::1]",
                "[fec0::1]",
                "[ff02::1]"
            })
    void refusesAddressesThatAreNotOfThePublicInternet(String literal) throws UnknownHostException {
        assertTrue(AddressRule.refusal(InetAddress.getByName(literal)).isPresent());
    }

    @ParameterizedTest
    @ValueSource(
            strings = {
                "1.1.1.1",
                "9.255.255.255",
                "11.0.0.0",
                "100.63.255.255",
                "100.128.0.0",
                "126.255.255.255",
                "128.0.0.0",
                "172.15.255.255",
                "172.32.0.0",
                "192.167.255.255",
                "192.169.0.0",
                "223.255.255.255",
                "[2606:4700::1111]",
                "[64:ff9b::1.1.1.1]",
                "[2002:101:101::1]",
                "[::ffff:1.1.1.1]"
            })
    void allowsPublicAddresses(String literal) throws UnknownHostException {
        assertEquals(Optional.empty(), AddressRule.refusal(InetAddress.getByName(literal)));
    }
}
