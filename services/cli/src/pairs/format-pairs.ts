import type { PairsAnswer } from "@moorline/answers";
import { qqPlotSvg } from "@moorline/figures";

export const PAIRS_FORMATS = ["json", "csv", "svg"] as const;
export type PairsFormat = (typeof PAIRS_FORMATS)[number];

/** The pairs as JSON (a contract), as CSV with a header (a rank beyond the data has empty cells), or as a figure. */
export function formatPairs(answer: PairsAnswer, format: PairsFormat): string {
  if (format === "json") return `${JSON.stringify(answer)}\n`;
  if (format === "svg") return figureOf(answer);
  const rows = answer.pairs.map(({ rank, baseline, production, low, high }) =>
    [rank, baseline, production, low, high].map((cell) => cell ?? "").join(","),
  );
  return `${["rank,baseline,production,low,high", ...rows].join("\n")}\n`;
}

const SHOWN_ID = 12;

function figureOf(answer: PairsAnswer): string {
  const { feature, unit, pairs, n, slice, window, baseline, against } = answer;
  const held = baseline === null ? rangeText(against!) : `baseline ${baseline.id.slice(0, SHOWN_ID)}`;
  const provenance = `${answer.stream}, ${slice}, ${rangeText(window)}, n = ${n.production}; against ${held}, n = ${n.baseline}`;
  const svg = qqPlotSvg({
    feature,
    unit,
    pairs,
    n,
    provenance,
    against: baseline === null ? held : "baseline",
  });
  return svg.endsWith("\n") ? svg : `${svg}\n`;
}

function rangeText({ from, to }: { readonly from: string; readonly to: string }): string {
  return `${from.slice(0, 16)}Z to ${to.slice(0, 16)}Z`;
}
