import { DuckDBStructType, type DuckDBType, DuckDBTypeId } from "@duckdb/node-api";
import type { DuckdbSession } from "./duckdb-session.js";
import { sqlText } from "./sql-text.js";
import { type TrainingFiles, unreadable } from "./training-files.js";

export type ColumnKind = "number" | "flag" | "text" | "time" | "json" | "other";

/** A column, or a field within a structured one. */
export interface FileColumn {
  readonly path: readonly string[];
  readonly kind: ColumnKind;
}

/** The columns that the files have by a look at their beginning (Parquet: their schema); fields of structures one by one. */
export async function listColumns(
  session: DuckdbSession,
  files: TrainingFiles,
): Promise<readonly FileColumn[]> {
  try {
    const result = await session.connection.stream(`select * from ${sniffingReader(files)} limit 0`);
    const types = result.columnTypes();
    return result.columnNames().flatMap((name, index) => leavesOf([name], types[index]!));
  } catch (cause) {
    throw unreadable(files, cause);
  }
}

function sniffingReader(files: TrainingFiles): string {
  const paths = pathList(files);
  switch (files.format) {
    case "parquet":
      return `read_parquet(${paths}, union_by_name = true)`;
    case "csv":
      return `read_csv(${paths}, header = true, union_by_name = true, nullstr = ${NO_VALUE})`;
    case "tsv":
      return `read_csv(${paths}, header = true, union_by_name = true, delim = '\t', nullstr = ${NO_VALUE})`;
    default:
      return `read_json(${paths}, format = ${jsonFormat(files)}, union_by_name = true, map_inference_threshold = -1)`;
  }
}

/** Cells that stand for no value. */
export const NO_VALUE = "['', 'NA', 'N/A', 'null', 'NULL']";

export function pathList(files: TrainingFiles): string {
  return `[${files.paths.map(sqlText).join(", ")}]`;
}

export function jsonFormat(files: TrainingFiles): string {
  return files.format === "ndjson" ? "'newline_delimited'" : "'auto'";
}

function leavesOf(path: readonly string[], type: DuckDBType): FileColumn[] {
  if (!(type instanceof DuckDBStructType)) return [{ path, kind: kindOf(type) }];
  return type.entryNames.flatMap((name, index) => leavesOf([...path, name], type.entryTypes[index]!));
}

const NUMBER_TYPES: ReadonlySet<DuckDBTypeId> = new Set([
  DuckDBTypeId.TINYINT,
  DuckDBTypeId.SMALLINT,
  DuckDBTypeId.INTEGER,
  DuckDBTypeId.BIGINT,
  DuckDBTypeId.HUGEINT,
  DuckDBTypeId.UTINYINT,
  DuckDBTypeId.USMALLINT,
  DuckDBTypeId.UINTEGER,
  DuckDBTypeId.UBIGINT,
  DuckDBTypeId.UHUGEINT,
  DuckDBTypeId.FLOAT,
  DuckDBTypeId.DOUBLE,
  DuckDBTypeId.DECIMAL,
]);

const TIME_TYPES: ReadonlySet<DuckDBTypeId> = new Set([
  DuckDBTypeId.DATE,
  DuckDBTypeId.TIMESTAMP,
  DuckDBTypeId.TIMESTAMP_S,
  DuckDBTypeId.TIMESTAMP_MS,
  DuckDBTypeId.TIMESTAMP_NS,
  DuckDBTypeId.TIMESTAMP_TZ,
]);

function kindOf(type: DuckDBType): ColumnKind {
  if (NUMBER_TYPES.has(type.typeId)) return "number";
  if (TIME_TYPES.has(type.typeId)) return "time";
  if (type.typeId === DuckDBTypeId.BOOLEAN) return "flag";
  if (type.alias === "JSON") return "json";
  return type.typeId === DuckDBTypeId.VARCHAR ? "text" : "other";
}
