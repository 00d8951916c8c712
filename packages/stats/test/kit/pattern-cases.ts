import { Random } from "./random.js";

/** What was done to production in a simulated case. */
export const TRUTHS = [
  "none",
  "location",
  "scale",
  "location and scale",
  "upper tail",
  "lower tail",
  "both tails",
  "contamination",
  "mixture",
  "gap",
  "clipped",
  "unit change",
  "sign flip",
  "default-fill",
  "rounding",
  "vanished atom",
] as const;

export type Truth = (typeof TRUTHS)[number];

export const FAMILIES = ["normal", "lognormal", "gamma", "t5", "bimodal"] as const;

export type Family = (typeof FAMILIES)[number];

export interface PatternCase {
  readonly truth: Truth;
  readonly family: Family;
  readonly baseline: Float64Array;
  readonly production: Float64Array;
}

/** Factor and offset of each unit change; Celsius and kelvin lie a mere move apart. */
const UNITS: readonly (readonly [number, number])[] = [
  ...[1_000, 100, 10, 60, 3_600, 1_024, 1e6, 2.54, 1.609344, 2.20462, 3.28084].flatMap((factor) => [
    [factor, 0] as const,
    [1 / factor, 0] as const,
  ]),
  [1.8, 32],
  [1 / 1.8, -32 / 1.8],
  [1, 273.15],
  [1, -273.15],
];

/** One simulated case of random size, drawn from a seed. Values lie two to eight standard deviations above zero. */
export function patternCase(truth: Truth, family: Family, m: number, seed: number, n = 50_000): PatternCase {
  const random = new Random(seed);
  const scale = 0.5 + 19.5 * random.uniform();
  const center = scale * (2 + 6 * random.uniform());
  const draw = (): number => center + scale * drawOf(family, random);
  const baseline = Float64Array.from({ length: n }, draw);
  const production = Float64Array.from({ length: m }, draw);
  const shape = shapeOf(baseline);
  const changed = CHANGES[truth](random, { baseline, production, ...shape });
  return { truth, family, ...changed };
}

function drawOf(family: Family, random: Random): number {
  switch (family) {
    case "normal":
      return random.normal();
    case "lognormal":
      return Math.exp(0.6 * random.normal()) - 1.2;
    case "gamma":
      return gammaOfThree(random) / Math.sqrt(3) - Math.sqrt(3);
    case "t5": {
      let chi = 0;
      for (let i = 0; i < 5; i += 1) chi += random.normal() ** 2;
      return random.normal() / Math.sqrt(chi / 3);
    }
    case "bimodal":
      return (random.uniform() < 0.5 ? -1 : 1) * 0.85 + 0.5 * random.normal();
  }
}

function gammaOfThree(random: Random): number {
  return -Math.log(random.uniform() * random.uniform() * random.uniform());
}

interface Sides {
  readonly baseline: Float64Array;
  readonly production: Float64Array;
}

interface Shape extends Sides {
  readonly quantile: (rank: number) => number;
  readonly s: number;
  readonly median: number;
}

function shapeOf(baseline: Float64Array): Omit<Shape, keyof Sides> {
  const sorted = baseline.slice().sort();
  const quantile = (rank: number) => sorted[Math.min(sorted.length - 1, Math.floor(rank * sorted.length))]!;
  return { quantile, s: (quantile(0.75) - quantile(0.25)) / 1.349, median: quantile(0.5) };
}

type Change = (random: Random, shape: Shape) => Sides;

/** Changes production's values one by one. */
function each(change: (x: number, random: Random, shape: Shape) => number): Change {
  return (random, shape) => ({
    baseline: shape.baseline,
    production: shape.production.map((x) => change(x, random, shape)),
  });
}

const between = (random: Random, from: number, to: number) => from + (to - from) * random.uniform();
const sign = (random: Random) => (random.uniform() < 0.5 ? -1 : 1);

/** A change whose sizes are drawn once a case. */
function sized<T>(
  sizes: (random: Random, shape: Shape) => T,
  change: (x: number, size: T, random: Random) => number,
): Change {
  return (random, shape) => {
    const size = sizes(random, shape);
    return { baseline: shape.baseline, production: shape.production.map((x) => change(x, size, random)) };
  };
}

/** What lies beyond p90 (p10) is stretched by 1.7 to 2.6. */
const stretched = (tails: "upper" | "lower" | "both") =>
  sized(
    (random, { quantile }) => ({ low: quantile(0.1), high: quantile(0.9), by: between(random, 1.7, 2.6) }),
    (x, { low, high, by }) => {
      if (tails !== "lower" && x > high) return high + by * (x - high);
      return tails !== "upper" && x < low ? low + by * (x - low) : x;
    },
  );

const CHANGES: Readonly<Record<Truth, Change>> = {
  none: each((x) => x),
  location: sized(
    (random, { s }) => sign(random) * between(random, 0.3, 1) * s,
    (x, by) => x + by,
  ),
  scale: sized(
    (random, { median }) => ({ median, by: Math.exp(sign(random) * between(random, 0.25, 0.6)) }),
    (x, { median, by }) => median + by * (x - median),
  ),
  "location and scale": sized(
    (random, { median, s }) => ({
      median,
      move: sign(random) * between(random, 0.3, 1) * s,
      by: Math.exp(sign(random) * between(random, 0.25, 0.6)),
    }),
    (x, { median, move, by }) => median + move + by * (x - median),
  ),
  "upper tail": stretched("upper"),
  "lower tail": stretched("lower"),
  "both tails": stretched("both"),
  contamination: sized(
    (random, { median, s }) => ({
      share: between(random, 0.01, 0.03),
      at: median + sign(random) * between(random, 8, 14) * s,
      s,
    }),
    (x, { share, at, s }, random) => (random.uniform() < share ? at + 0.5 * s * random.normal() : x),
  ),
  mixture: sized(
    (random, { s }) => ({
      share: between(random, 0.12, 0.3),
      move: sign(random) * between(random, 3, 5) * s,
    }),
    (x, { share, move }, random) => (random.uniform() < share ? x + move : x),
  ),
  gap: (random, { baseline, production, quantile }) => {
    const mass = between(random, 0.12, 0.25);
    const from = between(random, 0.15, 0.85 - mass);
    const [low, high] = [quantile(from), quantile(from + mass)];
    // What falls into the gap is drawn again from outside of it.
    const outside = production.filter((x) => x < low || x > high);
    const filled = production.map((x) =>
      x < low || x > high ? x : outside[Math.floor(random.uniform() * outside.length)]!,
    );
    return { baseline, production: filled };
  },
  clipped: sized(
    (random, { quantile }) => {
      const share = between(random, 0.02, 0.1);
      return { upper: random.uniform() < 0.5, at: [quantile(share), quantile(1 - share)] as const };
    },
    (x, { upper, at }) => (upper ? Math.min(x, at[1]) : Math.max(x, at[0])),
  ),
  "unit change": sized(
    (random) => UNITS[Math.floor(random.uniform() * UNITS.length)]!,
    (x, [factor, offset]) => factor * x + offset,
  ),
  "sign flip": each((x) => -x),
  "default-fill": sized(
    (random, { quantile }) => ({
      share: between(random, 0.02, 0.2),
      value: [0, -1, -999, 9_999, Math.round(quantile(between(random, 0.1, 0.9)))][
        Math.floor(5 * random.uniform())
      ]!,
    }),
    (x, { share, value }, random) => (random.uniform() < share ? value : x),
  ),
  rounding: sized(
    (random, { s }) => between(random, 0.25, 1) * s,
    (x, step) => step * Math.round(x / step),
  ),
  "vanished atom": (random, { baseline, production, quantile }) => {
    const value = random.uniform() < 0.5 ? 0 : quantile(between(random, 0.1, 0.9));
    return { baseline: baseline.map((x) => (random.uniform() < 0.1 ? value : x)), production };
  },
};
