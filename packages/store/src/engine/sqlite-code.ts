const SQLITE_BUSY = 5;
const SQLITE_LOCKED = 6;

/**
 * SQLite's own words for the codes that matter here (sqlite3_errstr). The driver gives the code of what fails in `run` and `exec`, but
 * not of what fails in `all`, which every statement with RETURNING goes through.
 */
const WORDS: readonly (readonly [start: string, code: number])[] = [
  ["database is locked", SQLITE_BUSY],
  ["database table is locked", SQLITE_LOCKED],
  ["disk I/O error", 10],
  ["database disk image is malformed", 11],
  ["database or disk is full", 13],
  ["file is not a database", 26],
];

/** The primary result code: the low byte of SQLite's extended one; null for an error that is not SQLite's. */
export function sqliteCode(error: unknown): number | null {
  if (!(error instanceof Error)) return null;
  const { code, errcode } = error as Error & { readonly code?: unknown; readonly errcode?: unknown };
  if (typeof errcode === "number") return errcode & 0xff;
  if (code !== "ERR_SQLITE_ERROR") return null;
  return WORDS.find(([start]) => error.message.startsWith(start))?.[1] ?? null;
}

export function isSqliteBusy(error: unknown): boolean {
  const code = sqliteCode(error);
  return code === SQLITE_BUSY || code === SQLITE_LOCKED;
}
