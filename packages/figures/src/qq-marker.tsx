import type { VNode } from "preact";
import { numberText, rankText } from "./number-text.js";

interface MarkedPair {
  readonly rank: number;
  readonly baseline: number;
  readonly production: number;
  readonly low: number | null;
  readonly high: number | null;
}

const TAIL_RANK = 0.05;

/** Where a pair lies, and whether the baseline's quantile lies outside the band around production's: a difference at that rank. */
export function markerKind(pair: MarkedPair): {
  readonly part: "lower tail" | "body" | "upper tail";
  readonly outside: boolean;
} {
  const part = pair.rank <= TAIL_RANK ? "lower tail" : pair.rank >= 1 - TAIL_RANK ? "upper tail" : "body";
  const outside =
    (pair.low !== null && pair.baseline < pair.low) || (pair.high !== null && pair.baseline > pair.high);
  return { part, outside };
}

/** A triangle pointing outward in the tails, a circle in the body; filled where the line of equality lies outside the band. */
export function QqMarker({
  pair,
  x,
  y,
}: {
  readonly pair: MarkedPair;
  readonly x: number;
  readonly y: number;
}): VNode {
  const { part, outside } = markerKind(pair);
  const className = outside ? "mark outside" : "mark";
  const words = `${rankText(pair.rank)}: baseline ${numberText(pair.baseline)}, production ${numberText(pair.production)}${outside ? ", a difference beyond the band" : ""}`;
  const shape =
    part === "body" ? (
      <circle class={className} cx={x} cy={y} r={4} />
    ) : (
      <path class={className} d={triangle(x, y, part === "upper tail")} />
    );
  return (
    <g>
      <title>{words}</title>
      {shape}
    </g>
  );
}

/** The path of a triangle that points up or down. */
export function triangle(x: number, y: number, up: boolean): string {
  const tip = up ? -5.5 : 5.5;
  const at = (dx: number, dy: number) =>
    `${Math.round((x + dx) * 100) / 100} ${Math.round((y + dy) * 100) / 100}`;
  return `M${at(0, tip)}L${at(5, -tip * 0.7)}L${at(-5, -tip * 0.7)}Z`;
}
