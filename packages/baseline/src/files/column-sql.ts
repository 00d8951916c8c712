import { type FileColumn, jsonFormat, NO_VALUE, pathList } from "./file-columns.js";
import { sqlName, sqlText } from "./sql-text.js";
import type { TrainingFiles } from "./training-files.js";

/**
 * What is read from. Text formats are read as text, so that a value that is no number is found and told, wherever it stands, instead
 * of making the whole column something else.
 */
export function readerSql(files: TrainingFiles, columns: readonly FileColumn[]): string {
  const paths = pathList(files);
  switch (files.format) {
    case "parquet":
      return `read_parquet(${paths}, union_by_name = true)`;
    case "csv":
    case "tsv": {
      const delimiter = files.format === "tsv" ? ", delim = '\t'" : "";
      return `read_csv(${paths}, header = true, all_varchar = true, union_by_name = true, nullstr = ${NO_VALUE}${delimiter})`;
    }
    default: {
      const tops = new Set(columns.map(({ path }) => path[0]!));
      const types = [...tops].map((top) => `${sqlText(top)}: 'JSON'`).join(", ");
      return `read_json(${paths}, format = ${jsonFormat(files)}, columns = {${types}})`;
    }
  }
}

/** The value as text; null where there is none. */
export function textSql(files: TrainingFiles, column: FileColumn): string {
  const [top, ...rest] = column.path;
  if (files.format === "parquet") return `cast(${fieldSql(column)} as varchar)`;
  if (files.format === "csv" || files.format === "tsv") return sqlName(top!);
  const pointer = rest.map((part) => `/${part.replaceAll("~", "~0").replaceAll("/", "~1")}`).join("");
  return `json_extract_string(${sqlName(top!)}, ${sqlText(pointer === "" ? "$" : pointer)})`;
}

/** The value as a number; null where there is none or it is no number. */
export function numberSql(files: TrainingFiles, column: FileColumn): string {
  const typed = files.format === "parquet" && (column.kind === "number" || column.kind === "flag");
  return typed ? `cast(${fieldSql(column)} as double)` : `try_cast(${textSql(files, column)} as double)`;
}

/** The time as milliseconds since 1970. A number's unit is `unit`, or, where none is given, the one that puts it near our days. */
export function timeSql(
  files: TrainingFiles,
  column: FileColumn,
  unit: "iso" | "s" | "ms" | "us" | "ns",
): string {
  if (files.format === "parquet" && column.kind === "time") {
    return `epoch_ms(cast(${fieldSql(column)} as timestamptz))`;
  }
  const number = numberSql(files, column);
  const text = `epoch_ms(try_cast(${textSql(files, column)} as timestamptz))`;
  const counted = `cast(floor(case ${UNIT_ROWS.map((row) => unitCase(row, number, unit)).join(" ")} end) as bigint)`;
  return `case when ${number} is not null then ${counted} else ${text} end`;
}

const UNIT_ROWS = [
  { unit: "s", perMs: 0.001, below: 1e11 },
  { unit: "ms", perMs: 1, below: 1e14 },
  { unit: "us", perMs: 1e3, below: 1e17 },
  { unit: "ns", perMs: 1e6, below: Number.MAX_VALUE },
] as const;

function unitCase(row: (typeof UNIT_ROWS)[number], number: string, unit: string): string {
  const when = unit === "iso" ? `abs(${number}) < ${row.below}` : unit === row.unit ? "true" : "false";
  return `when ${when} then ${number} / ${row.perMs}`;
}

function fieldSql(column: FileColumn): string {
  const [top, ...rest] = column.path;
  return rest.reduce((sql, part) => `struct_extract(${sql}, ${sqlText(part)})`, sqlName(top!));
}
