import { FastRandom } from "./fast-random.js";

/** A named change to the values of a window, in place. */
export type Change = (column: Float64Array) => void;

/** The five changes whose delay is measured. Quantiles are those of the stream's own values. */
export function changesFor(
  quantile: (rank: number) => number,
  seed: number,
): Readonly<Record<string, Change>> {
  const random = new FastRandom(seed);
  const [p99, p95] = [quantile(0.99), quantile(0.95)];
  const each = (change: (x: number) => number): Change => {
    return (column) => {
      for (let i = 0; i < column.length; i += 1) column[i] = change(column[i]!);
    };
  };
  return {
    "mean + .2 sd": each((x) => x + 0.2),
    "scale x 1.3": each((x) => 1.3 * x),
    // A hundredth of the rows is taken from the others and put beyond p99, where the stream's own values lie.
    "twice the values beyond p99": each((x) =>
      x <= p99 && random.uniform() < 0.01 / 0.99 ? quantile(1 - 0.01 * random.uniform()) : x,
    ),
    "1 % of rows at + 10 sd": each((x) => (random.uniform() < 0.01 ? x + 10 : x)),
    "top 5 % stretched by 1.5": each((x) => (x > p95 ? p95 + 1.5 * (x - p95) : x)),
  };
}
