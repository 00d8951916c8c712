/** SQLite takes 32,766 parameters a statement, PostgreSQL 65,535; a few thousand are as quick as more. */
const PARAMETERS_A_STATEMENT = 6_000;
/** Bytes of bodies in one statement: the drivers hold a copy of them. */
const BYTES_A_STATEMENT = 16 * 1024 * 1024;

/** Cuts rows so that a multi-row insert of them stays under the engines' parameter limits and within a bounded size. */
export function* inChunks<T>(
  rows: readonly T[],
  columns: number,
  bytesOf: (row: T) => number = () => 0,
): Generator<T[]> {
  const most = Math.floor(PARAMETERS_A_STATEMENT / columns);
  let chunk: T[] = [];
  let bytes = 0;
  for (const row of rows) {
    const size = bytesOf(row);
    if (chunk.length === most || (chunk.length > 0 && bytes + size > BYTES_A_STATEMENT)) {
      yield chunk;
      chunk = [];
      bytes = 0;
    }
    chunk.push(row);
    bytes += size;
  }
  if (chunk.length > 0) yield chunk;
}

export function bodyBytes(row: { readonly body: Uint8Array }): number {
  return row.body.length;
}
