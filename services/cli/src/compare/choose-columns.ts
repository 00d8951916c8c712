import type { FileColumn, FileSides } from "@moorline/baseline";
import { nearestName } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { CompareFilesRequest } from "./compare-files.js";

/** A column of both files and how it is compared. */
export interface ChosenColumn {
  readonly name: string;
  readonly kind: "numeric" | "categorical";
}

/**
 * The columns to compare: those asked for, else all numeric and text columns that both files have. Text is categorical, and so is whatever was named so.
 *
 * @throws MOORLINE_INPUT_COMPARE_FEATURE when a named column is not in both files
 * @throws MOORLINE_INPUT_COMPARE_NO_FEATURES when nothing is left
 */
export function chooseColumns(
  baseline: FileSides,
  production: FileSides,
  request: CompareFilesRequest,
): readonly ChosenColumn[] {
  const { features, categorical, sliceBy } = request;
  for (const name of [...features, ...categorical, ...(sliceBy === null ? [] : [sliceBy])]) {
    requireColumn(name, baseline, production);
  }
  const kindOf = (name: string): ChosenColumn["kind"] | null => {
    const sides = [baseline.find(name)!, production.find(name)!];
    if (categorical.some((named) => named === name || baseline.find(named) === sides[0]))
      return "categorical";
    if (sides.every(isNumeric)) return "numeric";
    return sides.every(({ kind }) => kind === "text") ? "categorical" : null;
  };
  if (features.length > 0) {
    // A column that was asked for is read as numbers unless it is text or was named otherwise: what is no number in it is then told.
    const asked = new Set([...features, ...categorical]);
    return [...asked].map((name) => ({ name, kind: kindOf(name) ?? "numeric" }));
  }
  const both = baseline.columns
    .map(nameOf)
    .filter((name) => name !== sliceBy && production.find(name) !== null);
  const chosen = both.map((name) => ({ name, kind: kindOf(name) }));
  const left = chosen.filter(({ kind }) => kind === null).map(({ name }) => name);
  if (left.length > 0) {
    request.onNote?.(
      `not compared, for they are neither numbers in both files nor text in both: ${left.join(", ")}`,
    );
  }
  const known = chosen.filter((column): column is ChosenColumn => column.kind !== null);
  if (known.length > 0) return known;
  throw new MoorlineError("MOORLINE_INPUT_COMPARE_NO_FEATURES", {
    baseline: request.baseline,
    production: request.production,
  });
}

function requireColumn(name: string, ...sides: readonly FileSides[]): void {
  for (const side of sides) {
    if (side.find(name) !== null) continue;
    const columns = side.columns.map(nameOf);
    const near = nearestName(name, columns);
    const meant = near === null ? "" : ` (did you mean ${near}?)`;
    throw new MoorlineError("MOORLINE_INPUT_COMPARE_FEATURE", { file: side.source, name, meant, columns });
  }
}

function isNumeric({ kind }: FileColumn): boolean {
  return kind === "number" || kind === "flag";
}

function nameOf(column: FileColumn): string {
  return column.path.join(".");
}
