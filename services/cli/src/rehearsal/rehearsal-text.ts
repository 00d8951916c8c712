import type { RehearsalAnswer, RehearsedPage } from "@moorline/answers";
import { formatDuration } from "@moorline/config";
import { textTable } from "../terminal/table.js";

/** The pages that would have been, beside how many the config's tolerances give. */
export function rehearsalText(answer: RehearsalAnswer): string {
  const { range, windows, thin, pages, configuredPages } = answer;
  const lines = [
    `Rehearsal of ${answer.stream}, ${minute(range.from)} to ${minute(range.to)} UTC, against baseline ${answer.baseline.id.slice(0, 12)}`,
    `${windows.toLocaleString("en-US")} windows decided, ${thin.toLocaleString("en-US")} of them with too few values`,
    `tolerances tried: ${tolerancesOf(answer.tolerances.tried)}`,
    "",
    pages.length === 0 ? "nothing would have paged\n" : pageTable(pages),
    `${countOf(pages)}; with the config's tolerances (${tolerancesOf(answer.tolerances.configured)}) ${countOf(configuredPages)}.`,
    "Nothing was written or sent. What did not page is not proof of safety.",
  ];
  return `${lines.join("\n")}\n`;
}

function pageTable(pages: readonly RehearsedPage[]): string {
  const rows = pages.map((page) => [
    minute(page.from),
    page.to === null ? "still" : formatDuration(page.minutes * 60_000),
    page.feature,
    page.slice,
    page.horizon,
    page.reading,
  ]);
  return textTable(["from", "for", "feature", "slice", "horizon", "why"], rows);
}

function countOf(pages: readonly RehearsedPage[]): string {
  return pages.length === 1 ? "1 page" : `${pages.length} pages`;
}

function tolerancesOf(decision: RehearsalAnswer["tolerances"]["tried"]): string {
  const { persistence, releaseAfter, bodyFloor, tailFactor } = decision;
  return `persistence ${persistence}, releaseAfter ${releaseAfter}, bodyFloor ${bodyFloor}, tailFactor ${tailFactor}`;
}

function minute(iso: string): string {
  return iso.slice(0, 16).replace("T", " ");
}
