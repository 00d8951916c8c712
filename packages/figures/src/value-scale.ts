import { type ScaleContinuousNumeric, scaleLinear, scaleLog, scaleSymlog } from "d3-scale";

export type AxisKind = "linear" | "log" | "symlog";

export const AXIS_WORDS: Record<AxisKind, string> = {
  linear: "linear axes",
  log: "logarithmic axes",
  symlog: "symmetric logarithmic axes",
};

export interface ValueScale {
  readonly kind: AxisKind;
  readonly at: (value: number) => number;
  readonly ticks: readonly number[];
}

/** From this ratio of largest to smallest on, a linear axis would press the small values into one line. */
const LOG_FROM_RATIO = 100;

/**
 * Which axis suits the values: logarithmic where all are positive and span two decades or more, symmetric-logarithmic where they span as much on
 * both sides of zero or down to it, else linear.
 */
export function chooseAxis(values: readonly number[]): AxisKind {
  const sizes = values.map(Math.abs).filter((size) => size > 0);
  if (sizes.length === 0) return "linear";
  const largest = Math.max(...sizes);
  const middle = sizes.toSorted((a, b) => a - b)[Math.floor(sizes.length / 2)]!;
  if (values.every((value) => value > 0))
    return largest / Math.min(...sizes) >= LOG_FROM_RATIO ? "log" : "linear";
  return largest / middle >= LOG_FROM_RATIO ? "symlog" : "linear";
}

/** The difference of two doubles near the largest would be infinite: such values are drawn at the edge of what can be told apart. */
const LARGEST_DRAWN = 1e300;

function drawable(value: number): number {
  return Math.min(LARGEST_DRAWN, Math.max(-LARGEST_DRAWN, value));
}

/** A scale over the values with a little room at both ends. */
export function valueScale(
  values: readonly number[],
  kind: AxisKind,
  range: readonly [number, number],
): ValueScale {
  const scale = scaleOf(values.map(drawable), kind).range([...range]);
  return { kind, at: (value) => scale(drawable(value)), ticks: ticksOf(scale, kind) };
}

function scaleOf(values: readonly number[], kind: AxisKind): ScaleContinuousNumeric<number, number> {
  const [least, most] = [Math.min(...values), Math.max(...values)];
  if (kind === "log") return scaleLog().domain([least / 1.2, most * 1.2]);
  const room = (most - least) * 0.04 || Math.max(Math.abs(most) * 0.1, 1);
  if (kind === "linear") return scaleLinear().domain([least - room, most + room]);
  const sizes = values.map(Math.abs).filter((size) => size > 0);
  const constant = sizes.toSorted((a, b) => a - b)[Math.floor(sizes.length / 4)] ?? 1;
  return scaleSymlog()
    .constant(constant)
    .domain([least - room, most + room]);
}

const MOST_TICKS = 7;

function ticksOf(scale: ScaleContinuousNumeric<number, number>, kind: AxisKind): readonly number[] {
  const ticks = scale.ticks(6);
  if (kind !== "log" || ticks.length <= MOST_TICKS) return ticks;
  const decades = ticks.filter((tick) => Math.abs(Math.log10(tick) - Math.round(Math.log10(tick))) < 1e-9);
  return decades.length >= 2
    ? decades
    : ticks.filter((_, index) => index % Math.ceil(ticks.length / MOST_TICKS) === 0);
}
