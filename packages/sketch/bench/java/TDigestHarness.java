import com.tdunning.math.stats.MergingDigest;
import com.tdunning.math.stats.TDigest;
import java.io.BufferedReader;
import java.io.InputStreamReader;
import java.lang.management.ManagementFactory;
import java.lang.management.ThreadMXBean;
import java.nio.ByteBuffer;
import java.nio.ByteOrder;
import java.nio.file.Files;
import java.nio.file.Paths;
import java.util.ArrayList;
import java.util.List;

/**
 * Answers one line of standard input with one line of standard output, so that the Java reference takes part in each round of
 * the measurement. Times are CPU times of the thread.
 */
public class TDigestHarness {
    private static final double COMPRESSION = 100;
    private static final ThreadMXBean THREADS = ManagementFactory.getThreadMXBean();
    private static double[] values = new double[0];
    private static double sink = 0;

    public static void main(String[] args) throws Exception {
        BufferedReader in = new BufferedReader(new InputStreamReader(System.in));
        for (String line = in.readLine(); line != null; line = in.readLine()) {
            String[] words = line.split(" ");
            switch (words[0]) {
                case "load":
                    load(words[1]);
                    System.out.println(values.length);
                    break;
                case "add":
                    System.out.println(addNanos());
                    break;
                case "merge":
                    System.out.println(mergeNanos(Integer.parseInt(words[1]), words[2].equals("compress")));
                    break;
                case "quantile":
                    System.out.println(quantileNanos());
                    break;
                case "quantiles":
                    System.out.println(quantiles(Integer.parseInt(words[1]), words[2].split(",")));
                    break;
                default:
                    throw new IllegalArgumentException(line);
            }
            System.out.flush();
        }
    }

    private static void load(String path) throws Exception {
        ByteBuffer bytes = ByteBuffer.wrap(Files.readAllBytes(Paths.get(path))).order(ByteOrder.LITTLE_ENDIAN);
        values = new double[bytes.remaining() / 8];
        bytes.asDoubleBuffer().get(values);
    }

    private static TDigest digestOf(int from, int to) {
        TDigest digest = new MergingDigest(COMPRESSION);
        for (int i = from; i < to; i++) digest.add(values[i]);
        return digest;
    }

    private static List<TDigest> parts(int count) {
        List<TDigest> parts = new ArrayList<>();
        int size = values.length / count;
        for (int i = 0; i < count; i++) parts.add(digestOf(i * size, (i + 1) * size));
        return parts;
    }

    private static double addNanos() {
        long start = THREADS.getCurrentThreadCpuTime();
        TDigest digest = digestOf(0, values.length);
        sink += digest.quantile(0.5);
        return (double) (THREADS.getCurrentThreadCpuTime() - start) / values.length;
    }

    /** A fold; with `compress` each step ends in a digest that can be read, without it the work is put off as the library does. */
    private static double mergeNanos(int count, boolean compress) {
        List<TDigest> parts = parts(count);
        for (TDigest part : parts) part.compress();
        long start = THREADS.getCurrentThreadCpuTime();
        TDigest merged = new MergingDigest(COMPRESSION);
        for (TDigest part : parts) {
            merged.add(part);
            if (compress) merged.compress();
        }
        sink += merged.quantile(0.5);
        return (double) (THREADS.getCurrentThreadCpuTime() - start) / count;
    }

    private static double quantileNanos() {
        TDigest digest = digestOf(0, values.length);
        digest.compress();
        int calls = 200_000;
        long start = THREADS.getCurrentThreadCpuTime();
        for (int i = 0; i < calls; i++) sink += digest.quantile((i % 997 + 0.5) / 997);
        return (double) (THREADS.getCurrentThreadCpuTime() - start) / calls;
    }

    /** The number of centroids, then the quantiles; of one digest, or of `count` digests merged at once. */
    private static String quantiles(int count, String[] ranks) {
        TDigest digest = digestOf(0, 0);
        if (count == 1) digest = digestOf(0, values.length);
        else digest.add(parts(count));
        double[] answers = new double[ranks.length];
        int live = digest.centroidCount();
        for (int i = 0; i < ranks.length; i++) answers[i] = digest.quantile(Double.parseDouble(ranks[i]));
        StringBuilder line = new StringBuilder().append(live);
        for (double answer : answers) line.append(',').append(answer);
        return line.toString();
    }
}
