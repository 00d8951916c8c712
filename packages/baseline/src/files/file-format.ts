import { MoorlineError } from "@moorline/errors";

export type FileFormat = "csv" | "tsv" | "parquet" | "ndjson" | "json";

const FORMAT_OF_ENDING: Readonly<Record<string, FileFormat>> = {
  csv: "csv",
  tsv: "tsv",
  tab: "tsv",
  parquet: "parquet",
  pq: "parquet",
  ndjson: "ndjson",
  jsonl: "ndjson",
  json: "json",
};

/**
 * The format that a file's ending names; `.gz` after a text format counts too.
 *
 * @throws MOORLINE_INPUT_FILE_FORMAT when the ending is none that is known
 */
export function formatOfFile(file: string): FileFormat {
  const ending = /\.([A-Za-z]+)(\.gz)?$/.exec(file);
  const name = ending?.[1]?.toLowerCase() ?? "";
  const format = Object.hasOwn(FORMAT_OF_ENDING, name) ? FORMAT_OF_ENDING[name]! : null;
  if (format === null || (format === "parquet" && ending?.[2] !== undefined)) {
    throw new MoorlineError("MOORLINE_INPUT_FILE_FORMAT", { file });
  }
  return format;
}
