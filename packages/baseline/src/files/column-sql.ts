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

/** The value as a number, a flag as 0 or 1; null where there is none or it is neither. */
export function numberSql(files: TrainingFiles, column: FileColumn): string {
  const typed = files.format === "parquet" && (column.kind === "number" || column.kind === "flag");
  if (typed) return `cast(${fieldSql(column)} as double)`;
  const number = `try_cast(${textSql(files, column)} as double)`;
  if (column.kind !== "flag") return number;
  return `coalesce(${number}, cast(try_cast(${textSql(files, column)} as boolean) as double))`;
}

/** Longest text, in characters, that is a category as it is; of a longer one the beginning, its length and a hash of the whole. */
const MOST_CATEGORY_LENGTH = 256;

/**
 * The value as a category; null where there is none. Numbers and flags are written the same way whatever the format: 1 and 1.0 are one category, true
 * and TRUE too.
 */
export function categorySql(files: TrainingFiles, column: FileColumn): string {
  const text = textSql(files, column);
  const plain =
    column.kind === "number" ? plainNumberSql(text) : column.kind === "flag" ? `lower(${text})` : text;
  const short = `left(${plain}, 120) || '… (' || length(${plain}) || ' characters, ' || md5(${plain}) || ')'`;
  return `case when length(${plain}) > ${MOST_CATEGORY_LENGTH} then ${short} else ${plain} end`;
}

function plainNumberSql(text: string): string {
  const number = `try_cast(${text} as double)`;
  const whole = `${number} = floor(${number}) and abs(${number}) < 1e15`;
  return `coalesce(case when ${whole} then cast(cast(${number} as bigint) as varchar) else cast(${number} as varchar) end, ${text})`;
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
