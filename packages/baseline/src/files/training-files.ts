import { stat } from "node:fs/promises";
import { resolve } from "node:path";
import { isMoorlineError, MoorlineError } from "@moorline/errors";
import type { DuckdbSession } from "./duckdb-session.js";
import { type FileFormat, formatOfFile } from "./file-format.js";
import { sqlText } from "./sql-text.js";

/** Files of one format that are read as one, in the order of their names. */
export interface TrainingFiles {
  /** As the caller named them. */
  readonly source: string;
  readonly paths: readonly string[];
  readonly format: FileFormat;
}

const REMOTE = /^[a-z][a-z0-9+.-]*:\/\//i;

/**
 * The files that a path or pattern names.
 *
 * @throws MOORLINE_INPUT_FILES_NONE, …_FILE_REMOTE or …_FILE_FORMAT
 */
export async function findTrainingFiles(session: DuckdbSession, source: string): Promise<TrainingFiles> {
  if (REMOTE.test(source)) throw new MoorlineError("MOORLINE_INPUT_FILE_REMOTE", { file: source });
  const paths = await pathsOf(session, source);
  if (paths.length === 0) throw new MoorlineError("MOORLINE_INPUT_FILES_NONE", { pattern: source });
  const formats = new Set(paths.map(formatOfFile));
  if (formats.size > 1) {
    const reason = `the files have different formats (${[...formats].join(", ")})`;
    throw new MoorlineError("MOORLINE_INPUT_FILE_UNREADABLE", { file: source, reason });
  }
  return { source, paths, format: [...formats][0]! };
}

/** A path that exists is that file, even where its name looks like a pattern. */
async function pathsOf(session: DuckdbSession, source: string): Promise<string[]> {
  const found = await stat(source).catch(() => null);
  if (found?.isFile() === true) return [resolve(source)];
  if (found !== null) {
    const reason = "it is a folder: give a pattern such as folder/*.csv";
    throw new MoorlineError("MOORLINE_INPUT_FILE_UNREADABLE", { file: source, reason });
  }
  const rows = await session.rows(`select file from glob(${sqlText(resolve(source))}) order by file`);
  return rows.map(([file]) => String(file));
}

/** What DuckDB says of a file, in one line, as our error. */
export function unreadable(files: TrainingFiles, cause: unknown): MoorlineError {
  if (isMoorlineError(cause)) return cause;
  const text = cause instanceof Error ? cause.message : String(cause);
  const lines = text.split("\n").map((line) => line.trim());
  const telling = lines
    .filter((line) => /^(CSV Error|Invalid|Malformed|Error|Line|Expected)/i.test(line))
    .slice(0, 2);
  const reason = (telling.length > 0 ? telling : lines.slice(0, 1)).join("; ");
  return new MoorlineError("MOORLINE_INPUT_FILE_UNREADABLE", { file: files.source, reason }, { cause });
}
