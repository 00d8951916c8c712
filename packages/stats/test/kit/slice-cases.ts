import { Random } from "./random.js";

/** Raw values of one slice on both sides. */
export interface SliceValues {
  readonly slice: string;
  readonly baseline: readonly number[];
  readonly production: readonly number[];
}

export const SLICE_CHANGES = ["shift of 1.5 sd", "10 % of rows + 5 sd", "2.5 times the traffic"] as const;

export interface SliceCase {
  readonly slices: readonly SliceValues[];
  readonly guilty: string;
}

/** Twelve slices with weights of .05 to .16 and levels of their own; one of them changes. n and m are of all slices. */
export function sliceCase(
  change: (typeof SLICE_CHANGES)[number],
  n: number,
  m: number,
  seed: number,
): SliceCase {
  const random = new Random(seed);
  const raw = Array.from({ length: 12 }, () => 0.05 + 0.11 * random.uniform());
  const sum = raw.reduce((a, b) => a + b, 0);
  const weights = raw.map((w) => w / sum);
  const levels = weights.map(() => 0.5 * random.normal());
  const guilty = Math.floor(12 * random.uniform());
  const traffic = weights.map((w, s) => (change === "2.5 times the traffic" && s === guilty ? 2.5 * w : w));
  const all = traffic.reduce((a, b) => a + b, 0);
  const draw = (s: number) => levels[s]! + random.normal();
  const moved = (s: number) => {
    if (s !== guilty || change === "2.5 times the traffic") return draw(s);
    if (change === "shift of 1.5 sd") return draw(s) + 1.5;
    return random.uniform() < 0.1 ? draw(s) + 5 : draw(s);
  };
  return {
    guilty: `s=${guilty}`,
    slices: weights.map((w, s) => ({
      slice: `s=${s}`,
      baseline: random.sample(Math.round(n * w), () => draw(s)),
      production: random.sample(Math.round((m * traffic[s]!) / all), () => moved(s)),
    })),
  };
}
