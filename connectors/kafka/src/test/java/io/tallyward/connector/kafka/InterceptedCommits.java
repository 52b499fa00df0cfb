package io.tallyward.connector.kafka;

import java.lang.reflect.InvocationTargetException;
import java.lang.reflect.Proxy;
import java.util.function.Consumer;
import org.apache.kafka.clients.producer.KafkaProducer;
import org.apache.kafka.clients.producer.Producer;

/** A real producer whose commits are left to the test. */
final class InterceptedCommits {

    private InterceptedCommits() {}

    @SuppressWarnings("unchecked")
    static Producer<byte[], byte[]> of(
            KafkaProducer<byte[], byte[]> real, Consumer<KafkaProducer<byte[], byte[]>> commit) {
        return (Producer<byte[], byte[]>) Proxy.newProxyInstance(
                InterceptedCommits.class.getClassLoader(),
                new Class<?>[] {Producer.class},
                (proxy, method, arguments) -> {
                    if (method.getName().equals("commitTransaction")) {
                        commit.accept(real);
                        return null;
                    }
                    try {
                        return method.invoke(real, arguments);
                    } catch (InvocationTargetException failure) {
                        throw failure.getCause();
                    }
                });
    }
}
