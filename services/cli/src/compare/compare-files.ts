import {
  type CategoryComparison,
  compareCategoryFeature,
  compareFeature,
  type FeatureComparison,
} from "@moorline/answers";
import { FileSides, type OnProgress } from "@moorline/baseline";
import { chooseColumns } from "./choose-columns.js";

/** One column and slice, by the kind of the column. */
export type ComparedColumn = FeatureComparison | CategoryComparison;

/** What `moorline compare --format json` prints. */
export interface FileComparison {
  readonly baseline: { readonly source: string; readonly rows: number };
  readonly production: { readonly source: string; readonly rows: number };
  readonly features: readonly ComparedColumn[];
}

export interface CompareFilesRequest {
  readonly baseline: string;
  readonly production: string;
  /** Empty: every numeric and text column that both have. */
  readonly features: readonly string[];
  /** Columns to compare as categories, whatever they hold. */
  readonly categorical: readonly string[];
  readonly sliceBy: string | null;
  readonly onProgress?: OnProgress | undefined;
  /** Told what is left out, in a sentence. */
  readonly onNote?: (sentence: string) => void;
}

/** Most slice values that are compared, the most frequent first. */
const MOST_SLICES = 50;

/** @throws MOORLINE_INPUT_FILE…, MOORLINE_INPUT_COMPARE… when files or columns cannot be used */
export async function compareFiles(request: CompareFilesRequest): Promise<FileComparison> {
  const baseline = await FileSides.open(request.baseline);
  try {
    const production = await FileSides.open(request.production);
    try {
      return await compareSides(baseline, production, request);
    } finally {
      await production.close();
    }
  } finally {
    await baseline.close();
  }
}

async function compareSides(
  baseline: FileSides,
  production: FileSides,
  request: CompareFilesRequest,
): Promise<FileComparison> {
  const chosen = chooseColumns(baseline, production, request);
  const namesOf = (kind: ComparedColumn["kind"]) =>
    chosen.filter((column) => column.kind === kind).map(({ name }) => name);
  const columns = { numeric: namesOf("numeric"), categorical: namesOf("categorical") };
  for (const sides of [baseline, production]) await sides.load(columns, request.sliceBy, request.onProgress);
  const values = await sliceValues(baseline, production, request);
  const compared: ComparedColumn[] = [];
  for (const { name, kind } of chosen) {
    const index = columns[kind].indexOf(name);
    for (const value of values) {
      const slice = value === null ? "all" : `${request.sliceBy}=${value}`;
      if (kind === "numeric") {
        const sides = [await baseline.side(index, value), await production.side(index, value)] as const;
        compared.push(compareFeature(name, slice, ...sides));
      } else {
        const sides = [
          await baseline.categories(index, value),
          await production.categories(index, value),
        ] as const;
        compared.push(compareCategoryFeature(name, slice, ...sides));
      }
    }
  }
  return {
    baseline: { source: baseline.source, rows: baseline.rows },
    production: { source: production.source, rows: production.rows },
    features: compared,
  };
}

/** `null` stands for all rows. */
async function sliceValues(
  baseline: FileSides,
  production: FileSides,
  { sliceBy, onNote }: CompareFilesRequest,
): Promise<(string | null)[]> {
  if (sliceBy === null) return [null];
  const known = await baseline.sliceValues(MOST_SLICES + 1);
  const now = await production.sliceValues(MOST_SLICES + 1);
  const values = [...new Set([...known, ...now])];
  if (values.length > MOST_SLICES) {
    onNote?.(`${sliceBy} has more than ${MOST_SLICES} values: the most frequent ones are compared`);
  }
  return [null, ...values.slice(0, MOST_SLICES)];
}
