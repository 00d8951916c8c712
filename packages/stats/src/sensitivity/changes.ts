import type { CdfView } from "../cdf-view.js";
import { eventsAt } from "../events-at.js";
import { quantileOf } from "../quantile-of.js";

/** Families of change whose smallest visible size is told. */
export const CHANGES = [
  "higher",
  "lower",
  "wider",
  "narrower",
  "upper tail heavier",
  "lower tail heavier",
  "missing more often",
] as const;

export type ChangeName = (typeof CHANGES)[number];

export interface ChangeFamily {
  readonly name: ChangeName;
  /** Size 0 is no change; larger sizes are larger changes. */
  readonly largest: number;
  /** Share at or below a threshold after a change of this size. */
  readonly share: (size: number, threshold: number, rank: number, expected: number) => number;
  /** The size as people read it: a move in the feature's unit, or a factor. */
  readonly shown: (size: number) => number;
  readonly kind: "move" | "factor" | "share";
}

/**
 * The families of change of one feature, as shares at its thresholds read off the baseline's CDF F.
 *
 * Definition  a move by d: F(x − d). A scale by c about the median: F(med + (x − med)/c). A tail whose share beyond its p99 (p1) is r times
 *             as large, what lies there keeping its shape and the rest giving way in proportion: 1 − r(1 − p) beyond p99, p(1 − .01 r)/.99 before.
 * Edges       without a spread (scale null) moves and scales are left out.
 */
export function changeFamilies(cdf: CdfView, scale: number | null): readonly ChangeFamily[] {
  const families: ChangeFamily[] = [tailFamily("upper tail heavier"), tailFamily("lower tail heavier")];
  if (scale === null || cdf.n === 0) return families;
  const below = (value: number) => eventsAt(cdf, value).upTo / cdf.n;
  const median = quantileOf(cdf, 0.5);
  const move = (name: "higher" | "lower", sign: 1 | -1): ChangeFamily => ({
    name,
    largest: LARGEST_MOVE * scale,
    share: (size, threshold) => below(threshold - sign * size),
    shown: (size) => size,
    kind: "move",
  });
  const widen = (name: "wider" | "narrower", factor: (size: number) => number): ChangeFamily => ({
    name,
    largest: Math.log(LARGEST_FACTOR),
    share: (size, threshold) => below(median + (threshold - median) / factor(size)),
    shown: factor,
    kind: "factor",
  });
  return [
    move("higher", 1),
    move("lower", -1),
    widen("wider", (size) => Math.exp(size)),
    widen("narrower", (size) => Math.exp(-size)),
    ...families,
  ];
}

const LARGEST_MOVE = 20;
const LARGEST_FACTOR = 1_000;
const TAIL = 0.01;

function tailFamily(name: "upper tail heavier" | "lower tail heavier"): ChangeFamily {
  const upper = (rank: number, ratio: number) =>
    rank >= 1 - TAIL ? 1 - ratio * (1 - rank) : (rank * (1 - TAIL * ratio)) / (1 - TAIL);
  return {
    name,
    largest: 1 / TAIL - 1,
    share: (size, _, __, expected) =>
      name === "upper tail heavier" ? upper(expected, 1 + size) : 1 - upper(1 - expected, 1 + size),
    shown: (size) => 1 + size,
    kind: "factor",
  };
}
