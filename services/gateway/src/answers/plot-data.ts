import type { PairsAnswer } from "@moorline/answers";
import type { QqPlotData, ShiftPlotData } from "@moorline/figures";

/** A pairs answer as the figure's data: the same for the page and the SVG. */
export function plotData(answer: PairsAnswer): QqPlotData {
  const held = answer.baseline === null ? "another range" : `baseline ${answer.baseline.id.slice(0, 12)}`;
  const part =
    answer.baseline !== null && answer.baseline.slice !== answer.slice
      ? ` (its slice ${answer.baseline.slice})`
      : "";
  return {
    feature: answer.feature,
    unit: answer.unit,
    pairs: answer.pairs,
    n: answer.n,
    provenance: `${answer.stream}, slice ${answer.slice}, ${rangeText(answer.window)}, ${held}${part}`,
    against: answer.baseline === null ? "other range" : "baseline",
  };
}

/** The same answer's shift function as a figure's data. */
export function shiftPlotData(answer: PairsAnswer): ShiftPlotData {
  const { feature, unit, provenance, against = "baseline" } = plotData(answer);
  return { feature, unit, provenance, against, shift: answer.shift };
}

/** `2026-12-01 10:00 to 11:00 UTC`; the second date only where it is another day. */
export function rangeText({ from, to }: { readonly from: string; readonly to: string }): string {
  const [day, otherDay] = [from.slice(0, 10), to.slice(0, 10)];
  const end = day === otherDay ? to.slice(11, 16) : `${otherDay} ${to.slice(11, 16)}`;
  return `${day} ${from.slice(11, 16)} to ${end} UTC`;
}
