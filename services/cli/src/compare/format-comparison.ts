import { markdownTable, markdownText, textTable, visible } from "../terminal/table.js";
import { CATEGORICAL_HEAD, categoricalCells, countOf, NUMERIC_HEAD, numericCells } from "./column-cells.js";
import type { FileComparison } from "./compare-files.js";

export const COMPARE_FORMATS = ["table", "json", "markdown"] as const;
export type CompareFormat = (typeof COMPARE_FORMATS)[number];

/** A comparison as a person or a program wants it; always ends with a line break. */
export function formatComparison(comparison: FileComparison, format: CompareFormat): string {
  if (format === "json") return `${JSON.stringify(comparison)}\n`;
  const sides = [
    `baseline    ${visible(comparison.baseline.source)}, ${countOf(comparison.baseline.rows)} rows`,
    `production  ${visible(comparison.production.source)}, ${countOf(comparison.production.rows)} rows`,
  ];
  if (format === "markdown") {
    const lines = comparison.features.map(
      (r) =>
        `- **${markdownText(r.feature)}** (${markdownText(r.slice)}): ${r.state}: ${markdownText(r.reading)}`,
    );
    const heads = sides.map((side) => `- ${side.replace(/ {2,}/, ": ")}`).join("\n");
    return `${heads}\n\n${tablesOf(comparison, markdownTable)}\n${lines.join("\n")}\n`;
  }
  const lines = comparison.features.map(
    (r) => `${visible(r.feature)} (${visible(r.slice)}) ${r.state}: ${r.reading}`,
  );
  return `${sides.join("\n")}\n\n${tablesOf(comparison, textTable)}\n${lines.join("\n")}\n`;
}

type Table = (head: readonly string[], rows: readonly (readonly string[])[]) => string;

/** One table for the numeric columns, one for the categorical ones. */
function tablesOf({ features }: FileComparison, table: Table): string {
  const numeric = features.flatMap((compared) =>
    compared.kind === "numeric" ? [numericCells(compared)] : [],
  );
  const categorical = features.flatMap((compared) =>
    compared.kind === "categorical" ? [categoricalCells(compared)] : [],
  );
  return [
    ...(numeric.length > 0 ? [table(NUMERIC_HEAD, numeric)] : []),
    ...(categorical.length > 0 ? [table(CATEGORICAL_HEAD, categorical)] : []),
  ].join("\n");
}
