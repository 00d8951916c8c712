import type { ChangeName } from "@moorline/stats";
import { FastRandom } from "./fast-random.js";

/** A named change to the values of a window, in place. */
export type Change = (column: Float64Array) => void;

/** A change that is made value by value. */
function each(change: (x: number) => number): Change {
  return (column) => {
    for (let i = 0; i < column.length; i += 1) column[i] = change(column[i]!);
  };
}

/** Rows taken from before p99 and put beyond it, where the stream's own values lie, until its share beyond is `ratio` times as large. */
function heavierTail(ratio: number, quantile: (rank: number) => number, random: FastRandom): Change {
  const p99 = quantile(0.99);
  const taken = (0.01 * (ratio - 1)) / 0.99;
  return each((x) => (x <= p99 && random.uniform() < taken ? quantile(1 - 0.01 * random.uniform()) : x));
}

/** The five changes whose delay is measured. Quantiles are those of the stream's own values. */
export function changesFor(
  quantile: (rank: number) => number,
  seed: number,
): Readonly<Record<string, Change>> {
  const random = new FastRandom(seed);
  const p95 = quantile(0.95);
  return {
    "mean + .2 sd": each((x) => x + 0.2),
    "scale x 1.3": each((x) => 1.3 * x),
    "twice the values beyond p99": heavierTail(2, quantile, random),
    "1 % of rows at + 10 sd": each((x) => (random.uniform() < 0.01 ? x + 10 : x)),
    "top 5 % stretched by 1.5": each((x) => (x > p95 ? p95 + 1.5 * (x - p95) : x)),
  };
}

/** A change of the sensitivity table at a size, for a stream of standard normal values. */
export function changeOfSize(
  change: Exclude<ChangeName, "missing more often">,
  size: number,
  quantile: (rank: number) => number,
  seed: number,
): Change {
  const random = new FastRandom(seed);
  switch (change) {
    case "higher":
      return each((x) => x + size);
    case "lower":
      return each((x) => x - size);
    case "wider":
    case "narrower":
      return each((x) => size * x);
    case "upper tail heavier":
      return heavierTail(size, quantile, random);
    case "lower tail heavier": {
      const mirrored = heavierTail(size, (rank) => -quantile(1 - rank + 1e-9), random);
      return (column) => {
        for (let i = 0; i < column.length; i += 1) column[i] = -column[i]!;
        mirrored(column);
        for (let i = 0; i < column.length; i += 1) column[i] = -column[i]!;
      };
    }
  }
}
