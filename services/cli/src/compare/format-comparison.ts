import type { FeatureComparison } from "@moorline/answers";
import { markdownTable, textTable, visible } from "../terminal/table.js";
import type { FileComparison } from "./compare-files.js";

export const COMPARE_FORMATS = ["table", "json", "markdown"] as const;
export type CompareFormat = (typeof COMPARE_FORMATS)[number];

/** A comparison as a person or a program wants it; always ends with a line break. */
export function formatComparison(comparison: FileComparison, format: CompareFormat): string {
  if (format === "json") return `${JSON.stringify(comparison)}\n`;
  const rows = comparison.features.map(cellsOf);
  const sides = [
    `baseline    ${visible(comparison.baseline.source)}, ${countOf(comparison.baseline.rows)} rows`,
    `production  ${visible(comparison.production.source)}, ${countOf(comparison.production.rows)} rows`,
  ];
  const readings = comparison.features.map(({ feature, slice, state, reading }) => ({
    feature,
    slice,
    state,
    reading,
  }));
  if (format === "markdown") {
    const lines = readings.map(
      (r) => `- **${visible(r.feature)}** (${visible(r.slice)}): ${r.state}: ${r.reading}`,
    );
    return `${sides.map((side) => `- ${side.replace(/ {2,}/, ": ")}`).join("\n")}\n\n${markdownTable(HEAD, rows)}\n${lines.join("\n")}\n`;
  }
  const lines = readings.map((r) => `${visible(r.feature)} (${visible(r.slice)}) ${r.state}: ${r.reading}`);
  return `${sides.join("\n")}\n\n${textTable(HEAD, rows)}\n${lines.join("\n")}\n`;
}

const HEAD = [
  "feature",
  "slice",
  "state",
  "n",
  "missing",
  "KS",
  "at",
  "W1 scaled",
  "lower tail",
  "upper tail",
];
const NONE = "–";

function cellsOf(compared: FeatureComparison): string[] {
  const { ks, wasserstein, tails, missing } = compared;
  const scaled = wasserstein?.scaled ?? null;
  const ratio = (tail: { readonly ratio: number } | null | undefined) =>
    tail == null ? NONE : `× ${figure(tail.ratio)}`;
  return [
    compared.feature,
    compared.slice,
    compared.state,
    countOf(compared.n.production),
    missing.production === null ? NONE : `${figure(missing.production * 100)} %`,
    ks === null ? NONE : figure(ks.distance),
    ks === null ? NONE : figure(ks.at),
    scaled === null ? NONE : figure(scaled),
    ratio(tails?.lower),
    ratio(tails?.upper),
  ];
}

function figure(value: number): string {
  return String(Number(value.toPrecision(3)));
}

function countOf(count: number): string {
  return count.toLocaleString("en-US");
}
