/** SQLite takes 32,766 parameters a statement, PostgreSQL 65,535; a few thousand are as quick as more. */
const PARAMETERS_A_STATEMENT = 6_000;

/** Cuts rows so that a multi-row insert of them stays under the engines' parameter limits. */
export function* inChunks<T>(rows: readonly T[], columns: number): Generator<T[]> {
  const size = Math.floor(PARAMETERS_A_STATEMENT / columns);
  for (let start = 0; start < rows.length; start += size) yield rows.slice(start, start + size);
}
