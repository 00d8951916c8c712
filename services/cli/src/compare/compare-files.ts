import { compareFeature, type FeatureComparison } from "@moorline/answers";
import { type FileColumn, FileSides, type OnProgress } from "@moorline/baseline";
import { nearestName } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { NumericSide } from "@moorline/stats";

/** What `moorline compare --format json` prints. */
export interface FileComparison {
  readonly baseline: { readonly source: string; readonly rows: number };
  readonly production: { readonly source: string; readonly rows: number };
  readonly features: readonly FeatureComparison[];
}

export interface CompareFilesRequest {
  readonly baseline: string;
  readonly production: string;
  /** Empty: every numeric column that both have. */
  readonly features: readonly string[];
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
  const features = chooseFeatures(baseline, production, request);
  if (request.sliceBy !== null) requireColumn(request.sliceBy, baseline, production);
  for (const sides of [baseline, production]) await sides.load(features, request.sliceBy, request.onProgress);
  const compared: FeatureComparison[] = [];
  for (const [index, feature] of features.entries()) {
    for (const value of await sliceValues(baseline, production, request)) {
      const slice = value === null ? "all" : `${request.sliceBy}=${value}`;
      const sides: [NumericSide, NumericSide] = [
        await baseline.side(index, value),
        await production.side(index, value),
      ];
      compared.push(compareFeature(feature, slice, ...sides));
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

function chooseFeatures(
  baseline: FileSides,
  production: FileSides,
  request: CompareFilesRequest,
): readonly string[] {
  if (request.features.length > 0) {
    for (const feature of request.features) requireColumn(feature, baseline, production);
    return request.features;
  }
  const { sliceBy, onNote } = request;
  const both = baseline.columns
    .map(nameOf)
    .filter((name) => name !== sliceBy && production.find(name) !== null);
  const numeric = both.filter((name) => isNumeric(baseline.find(name)) && isNumeric(production.find(name)));
  const other = both.filter((name) => !numeric.includes(name));
  if (other.length > 0) onNote?.(`not compared, for they are not numeric: ${other.join(", ")}`);
  if (numeric.length > 0) return numeric;
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

function isNumeric(column: FileColumn | null): boolean {
  return column !== null && (column.kind === "number" || column.kind === "flag");
}

function nameOf(column: FileColumn): string {
  return column.path.join(".");
}
