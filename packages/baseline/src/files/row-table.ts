import { createHash } from "node:crypto";
import { createReadStream } from "node:fs";
import { pipeline } from "node:stream/promises";
import { MoorlineError } from "@moorline/errors";
import type { OnProgress } from "../read-progress.js";
import { categorySql, numberSql, readerSql, textSql, timeSql } from "./column-sql.js";
import type { DuckdbSession } from "./duckdb-session.js";
import type { FileColumn } from "./file-columns.js";
import { sqlText } from "./sql-text.js";
import { type TrainingFiles, unreadable } from "./training-files.js";

/** A matched column with what it stands for. */
export interface BoundColumn {
  readonly name: string;
  readonly column: FileColumn;
}

export interface RowTableColumns {
  readonly features: readonly BoundColumn[];
  /** Columns whose values are categories. */
  readonly categories?: readonly BoundColumn[];
  readonly slices: readonly BoundColumn[];
  readonly time: (BoundColumn & { readonly unit: "iso" | "s" | "ms" | "us" | "ns" }) | null;
}

/** Rows of one batch, column by column. */
export interface RowBatch {
  readonly rows: number;
  /** Null: no value; NaN and infinities as they came. */
  readonly features: readonly (readonly (number | null)[])[];
  readonly slices: readonly (readonly string[])[];
  readonly timesMs: readonly (number | null)[];
}

/** What stands for an absent slice value, as in the collector. */
const NO_SLICE_VALUE = "(none)";

/**
 * The wanted columns of the files in a temporary table on disk, in the order of the rows: parsed once, read as often as needed, in
 * batches. Columns are f0, f1, … (features), c0, … (categories), s0, … (slices), t (time).
 */
export class RowTable {
  readonly session: DuckdbSession;
  readonly columns: RowTableColumns;
  readonly rows: number;

  private constructor(session: DuckdbSession, columns: RowTableColumns, rows: number) {
    this.session = session;
    this.columns = columns;
    this.rows = rows;
  }

  /**
   * @throws MOORLINE_INPUT_FILE_UNREADABLE when the files cannot be read to their end
   * @throws MOORLINE_INPUT_FILE_NOT_NUMBERS when a feature's column holds something else
   */
  static async load(
    session: DuckdbSession,
    files: TrainingFiles,
    columns: RowTableColumns,
    onProgress?: OnProgress,
  ): Promise<RowTable> {
    const stop = watchProgress(session, onProgress);
    try {
      await session.connection.run(createSql(files, columns));
    } catch (cause) {
      throw unreadable(files, cause);
    } finally {
      stop();
    }
    await refuseNonNumbers(session, files, columns);
    const [[rows]] = (await session.rows("select cast(count(*) as double) from rows")) as [[number]];
    return new RowTable(session, columns, rows);
  }

  /** All rows, batch by batch. */
  async *batches(orderBy: string | null = null): AsyncGenerator<RowBatch> {
    const { features, slices, time } = this.columns;
    const names = [...features.map((_, i) => `f${i}`), ...slices.map((_, i) => `s${i}`)];
    if (time !== null) names.push("cast(t as double)");
    if (names.length === 0) names.push("1");
    const order = orderBy === null ? "" : ` order by ${orderBy}`;
    const result = await this.session.connection.stream(`select ${names.join(", ")} from rows${order}`);
    for (;;) {
      const chunk = await result.fetchChunk();
      if (chunk === null || chunk.rowCount === 0) return;
      const values = names.map((_, index) => chunk.getColumnValues(index));
      yield {
        rows: chunk.rowCount,
        features: values.slice(0, features.length) as (number | null)[][],
        slices: values.slice(features.length, features.length + slices.length) as string[][],
        timesMs: time === null ? [] : (values[values.length - 1] as (number | null)[]),
      };
    }
  }
}

function createSql(
  files: TrainingFiles,
  { features, categories = [], slices, time }: RowTableColumns,
): string {
  const all = [...features, ...categories, ...slices, ...(time === null ? [] : [time])].map(
    ({ column }) => column,
  );
  const selected = [
    ...features.map(({ column }, i) => `${numberSql(files, column)} as f${i}`),
    ...categories.map(({ column }, i) => `${categorySql(files, column)} as c${i}`),
    ...slices.map(
      ({ column }, i) => `coalesce(${textSql(files, column)}, ${sqlText(NO_SLICE_VALUE)}) as s${i}`,
    ),
    ...(time === null ? [] : [`${timeSql(files, time.column, time.unit)} as t`]),
    `${oddSql(files, features)} as odd`,
  ];
  return `create table rows as select ${selected.join(", ")} from ${readerSql(files, all)}`;
}

/** The first value of a row that is there but no number, with the index of its feature before it. */
function oddSql(files: TrainingFiles, features: readonly BoundColumn[]): string {
  const cases = features.flatMap(({ column }, i) => {
    const number = numberSql(files, column);
    if (number.startsWith("cast")) return [];
    const text = textSql(files, column);
    return [`when ${number} is null and ${text} is not null then '${i}:' || left(${text}, 40)`];
  });
  return cases.length === 0 ? "cast(null as varchar)" : `case ${cases.join(" ")} end`;
}

async function refuseNonNumbers(
  session: DuckdbSession,
  files: TrainingFiles,
  { features }: RowTableColumns,
): Promise<void> {
  const [found] = await session.rows(
    "select cast(count(*) as double), first(odd order by rowid) from rows where odd is not null",
  );
  const [count, odd] = found as [number, string | null];
  if (count === 0 || odd === null) return;
  const [index, example] = [odd.slice(0, odd.indexOf(":")), odd.slice(odd.indexOf(":") + 1)];
  const column = features[Number(index)]!.column.path.join(".");
  throw new MoorlineError("MOORLINE_INPUT_FILE_NOT_NUMBERS", {
    file: files.source,
    column,
    count,
    example: JSON.stringify(example),
  });
}

const PROGRESS_EVERY_MS = 200;

function watchProgress(session: DuckdbSession, onProgress: OnProgress | undefined): () => void {
  if (onProgress === undefined) return () => undefined;
  const timer = setInterval(() => {
    const { percentage, rows_processed: rows } = session.connection.progress;
    const done = percentage >= 0 ? percentage / 100 : null;
    onProgress({ stage: "reading", rows: Number(rows), totalRows: null, done });
  }, PROGRESS_EVERY_MS);
  return () => clearInterval(timer);
}

/** SHA-256 of the files, one after the other. */
export async function hashFiles(files: TrainingFiles): Promise<string> {
  const hash = createHash("sha256");
  for (const path of files.paths) await pipeline(createReadStream(path), hash, { end: false });
  return hash.digest("hex");
}
