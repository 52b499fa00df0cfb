package io.tallyward.statistics;

import java.io.IOException;
import java.lang.reflect.Constructor;
import java.lang.reflect.Executable;
import java.lang.reflect.InvocationTargetException;
import java.lang.reflect.Method;
import java.lang.reflect.Modifier;
import java.lang.reflect.Type;
import java.net.URISyntaxException;
import java.nio.file.Files;
import java.nio.file.Path;
import java.util.ArrayList;
import java.util.Comparator;
import java.util.List;
import java.util.stream.Stream;

/** A public constructor or method of the module, found by looking at its compiled classes, so that none is forgotten. */
record PublicEntry(Executable executable) {

    /** Every public entry, in a fixed order. */
    static List<PublicEntry> all() {
        List<PublicEntry> entries = new ArrayList<>();
        for (Class<?> type : types()) {
            for (Constructor<?> constructor : type.getConstructors()) {
                if (!Modifier.isAbstract(type.getModifiers())) {
                    entries.add(new PublicEntry(constructor));
                }
            }
            for (Method method : type.getDeclaredMethods()) {
                if (Modifier.isPublic(method.getModifiers()) && !method.isSynthetic() && !isInherited(method)) {
                    entries.add(new PublicEntry(method));
                }
            }
        }
        entries.sort(Comparator.comparing(entry -> entry.executable.toGenericString()));
        return entries;
    }

    /** Public classes of the module, nested ones included. */
    private static List<Class<?>> types() {
        try {
            Path root = Path.of(io.tallyward.statistics.distribution.Normal.class
                    .getProtectionDomain()
                    .getCodeSource()
                    .getLocation()
                    .toURI());
            try (Stream<Path> files = Files.walk(root)) {
                List<Class<?>> types = new ArrayList<>();
                files.map(file -> root.relativize(file).toString())
                        .filter(name -> name.endsWith(".class") && !name.endsWith("-info.class"))
                        .sorted()
                        .map(name -> load(name.replace('/', '.').replaceAll("\\.class$", "")))
                        .filter(PublicEntry::isOpen)
                        .forEach(types::add);
                return types;
            }
        } catch (IOException | URISyntaxException e) {
            throw new IllegalStateException("classes of the module: " + e, e);
        }
    }

    /** A public class within a class that is not is out of reach. */
    private static boolean isOpen(Class<?> type) {
        return type == null
                || Modifier.isPublic(type.getModifiers())
                        && !type.isAnonymousClass()
                        && isOpen(type.getEnclosingClass());
    }

    private static Class<?> load(String name) {
        try {
            return Class.forName(name);
        } catch (ClassNotFoundException e) {
            throw new IllegalStateException(name, e);
        }
    }

    /** What every object, record and enum has. */
    private static boolean isInherited(Method method) {
        String name = method.getName();
        int parameters = method.getParameterCount();
        return parameters == 0 && (name.equals("toString") || name.equals("hashCode") || name.equals("values"))
                || parameters == 1 && (name.equals("equals") || name.equals("valueOf"));
    }

    boolean needsReceiver() {
        return executable instanceof Method && !Modifier.isStatic(executable.getModifiers());
    }

    Type[] parameters() {
        return executable.getGenericParameterTypes();
    }

    Class<?> owner() {
        return executable.getDeclaringClass();
    }

    /** What it makes or answers. */
    Class<?> produces() {
        return executable instanceof Method method ? method.getReturnType() : owner();
    }

    /** Calls it; a refusal comes out as the exception it was. */
    Object call(Object receiver, Object[] arguments) throws Throwable {
        try {
            return executable instanceof Method method
                    ? method.invoke(receiver, arguments)
                    : ((Constructor<?>) executable).newInstance(arguments);
        } catch (InvocationTargetException e) {
            throw e.getCause();
        }
    }

    @Override
    public String toString() {
        return owner().getSimpleName() + "." + (executable instanceof Method ? executable.getName() : "new");
    }
}
