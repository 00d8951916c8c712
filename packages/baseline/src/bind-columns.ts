import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { DuckdbSession } from "./files/duckdb-session.js";
import { type FileColumn, listColumns } from "./files/file-columns.js";
import { matchColumn } from "./files/match-column.js";
import type { BoundColumn, RowTableColumns } from "./files/row-table.js";
import type { TrainingFiles } from "./files/training-files.js";

/**
 * Which columns of the files stand for a stream's features, slice keys and event time. A slice key without a column is left out (its
 * slices are compared with `all`); a feature, or a time column that was asked for, is not.
 *
 * @throws MOORLINE_INPUT_FILE_COLUMNS naming everything that has no column
 */
export async function bindColumns(
  session: DuckdbSession,
  files: TrainingFiles,
  stream: StreamConfig,
  timeColumn?: string,
): Promise<RowTableColumns> {
  const columns = await listColumns(session, files);
  const bind = (name: string, path: readonly string[]): BoundColumn | null => {
    const column = matchColumn(columns, { name, path });
    return column === null ? null : { name, column };
  };
  const features = stream.features.map(({ name, path }) => bind(name, path));
  const time = bindTime(columns, stream, timeColumn);
  const missing = stream.features.filter((_, f) => features[f] === null).map(({ name }) => name);
  if (timeColumn !== undefined && time === null) missing.push(timeColumn);
  if (missing.length > 0) {
    const known = columns.map(({ path }) => path.join("."));
    throw new MoorlineError("MOORLINE_INPUT_FILE_COLUMNS", { file: files.source, missing, columns: known });
  }
  return {
    features: features.filter((bound) => bound !== null),
    slices: stream.slices.map(({ key, path }) => bind(key, path)).filter((bound) => bound !== null),
    time,
  };
}

function bindTime(
  columns: readonly FileColumn[],
  { payload }: StreamConfig,
  timeColumn: string | undefined,
): RowTableColumns["time"] {
  if (timeColumn !== undefined) {
    const column = matchColumn(columns, { name: timeColumn, path: timeColumn.split(".") });
    return column === null ? null : { name: timeColumn, column, unit: "iso" };
  }
  if (payload.eventTime === null) return null;
  const name = payload.eventTime.join(".");
  const column = matchColumn(columns, { name, path: payload.eventTime });
  return column === null ? null : { name, column, unit: payload.eventTimeUnit };
}
