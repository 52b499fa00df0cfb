package io.tallyward.demo.child;

import java.io.IOException;
import java.net.InetAddress;
import java.net.InetSocketAddress;
import java.net.ServerSocket;
import java.util.ArrayList;
import java.util.List;

/** Ports of the loopback address that are free at this moment. */
public final class LoopbackPorts {

    /** The only address the demo listens on. */
    public static final String HOST = "127.0.0.1";

    private LoopbackPorts() {}

    /** Different free ports; another process may take one before it is used, which then shows as a failure to start. */
    public static List<Integer> free(int count) throws IOException {
        List<ServerSocket> held = new ArrayList<>();
        List<Integer> ports = new ArrayList<>();
        try {
            for (int i = 0; i < count; i++) {
                ServerSocket socket = new ServerSocket();
                held.add(socket);
                socket.bind(new InetSocketAddress(InetAddress.getByName(HOST), 0));
                ports.add(socket.getLocalPort());
            }
        } finally {
            for (ServerSocket socket : held) {
                socket.close();
            }
        }
        return ports;
    }
}
