import { NumericSketch } from "@moorline/sketch";
import { type CategoryCounts, cdfOf, type NumericSide } from "@moorline/stats";
import { readCategoryCounts } from "./files/category-counts.js";
import { DuckdbSession } from "./files/duckdb-session.js";
import { type FileColumn, listColumns } from "./files/file-columns.js";
import { matchColumn } from "./files/match-column.js";
import { type BoundColumn, RowTable } from "./files/row-table.js";
import { sqlText } from "./files/sql-text.js";
import { findTrainingFiles, type TrainingFiles } from "./files/training-files.js";
import { sideOfSketch } from "./part-side.js";
import type { OnProgress } from "./read-progress.js";

/** Rows up to which a file's values are compared as they are; beyond, through a sketch of this compression. */
const MOST_EXACT_ROWS = 5_000_000;
const SKETCH_COMPRESSION = 2_000;

/** Names of columns, by how they are compared. */
export interface ComparedColumns {
  readonly numeric: readonly string[];
  readonly categorical: readonly string[];
}

/** The columns of files, each as a side of a comparison. */
export class FileSides {
  readonly columns: readonly FileColumn[];
  readonly source: string;
  readonly #session: DuckdbSession;
  readonly #files: TrainingFiles;
  #table: RowTable | null = null;

  private constructor(session: DuckdbSession, files: TrainingFiles, columns: readonly FileColumn[]) {
    this.#session = session;
    this.#files = files;
    this.source = files.source;
    this.columns = columns;
  }

  static async open(source: string): Promise<FileSides> {
    const session = await DuckdbSession.open();
    try {
      const files = await findTrainingFiles(session, source);
      return new FileSides(session, files, await listColumns(session, files));
    } catch (error) {
      await session.close();
      throw error;
    }
  }

  /** The column that a person means by `name`: its name, its path with dots, or the last part of its path. */
  find(name: string): FileColumn | null {
    return matchColumn(this.columns, { name, path: name.split(".") });
  }

  /** Reads the columns that are compared, and the one to slice by. Every name must be found by `find`. */
  async load(
    { numeric, categorical }: ComparedColumns,
    sliceBy: string | null,
    onProgress?: OnProgress,
  ): Promise<void> {
    const bind = (name: string): BoundColumn => ({ name, column: this.find(name)! });
    const columns = {
      features: numeric.map(bind),
      categories: categorical.map(bind),
      slices: sliceBy === null ? [] : [bind(sliceBy)],
      time: null,
    };
    this.#table = await RowTable.load(this.#session, this.#files, columns, onProgress);
  }

  get rows(): number {
    return this.#table?.rows ?? 0;
  }

  /** Values of the slice column, most frequent first. */
  async sliceValues(limit: number): Promise<readonly string[]> {
    const found = await this.#session.rows(
      `select s0, count(*) as n from rows group by 1 order by n desc, 1 limit ${limit}`,
    );
    return found.map(([value]) => String(value));
  }

  /** The values of one numeric column, of all rows or those with one slice value. */
  async side(featureIndex: number, sliceValue: string | null): Promise<NumericSide> {
    const result = await this.#session.connection.stream(
      `select f${featureIndex} from rows where ${sliceSql(sliceValue)}`,
    );
    const take = this.rows <= MOST_EXACT_ROWS ? new ExactValues(this.rows) : new SketchedValues();
    for (;;) {
      const chunk = await result.fetchChunk();
      if (chunk === null || chunk.rowCount === 0) return take.side();
      take.add(chunk.getColumnValues(0) as (number | null)[]);
    }
  }

  /** The counts of one categorical column, of all rows or those with one slice value; the rarest of very many are in `other`. */
  async categories(categoryIndex: number, sliceValue: string | null): Promise<CategoryCounts> {
    return await readCategoryCounts(this.#session, `c${categoryIndex}`, sliceSql(sliceValue));
  }

  async close(): Promise<void> {
    await this.#session.close();
  }
}

function sliceSql(sliceValue: string | null): string {
  return sliceValue === null ? "true" : `s0 = ${sqlText(sliceValue)}`;
}

/** Finite values as they are, the rest counted by kind. */
class ExactValues {
  readonly #finite: Float64Array;
  #count = 0;
  #missing = 0;
  #nonFinite = 0;

  constructor(mostRows: number) {
    this.#finite = new Float64Array(mostRows);
  }

  add(values: readonly (number | null)[]): void {
    for (const value of values) {
      if (value === null) this.#missing++;
      else if (Number.isFinite(value)) this.#finite[this.#count++] = value;
      else this.#nonFinite++;
    }
  }

  side(): NumericSide {
    return {
      cdf: cdfOf(this.#finite.subarray(0, this.#count)),
      events: this.#count + this.#missing + this.#nonFinite,
      missing: this.#missing,
      nonFinite: this.#nonFinite,
    };
  }
}

class SketchedValues {
  readonly #sketch = new NumericSketch({ compression: SKETCH_COMPRESSION });

  add(values: readonly (number | null)[]): void {
    for (const value of values) {
      if (value === null) this.#sketch.addMissing();
      else this.#sketch.add(value);
    }
  }

  side(): NumericSide {
    return sideOfSketch(this.#sketch);
  }
}
