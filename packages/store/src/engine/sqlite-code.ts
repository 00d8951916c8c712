const SQLITE_BUSY = 5;
const SQLITE_LOCKED = 6;

/** The primary result code: the low byte of SQLite's extended one; null for an error that is not SQLite's. */
export function sqliteCode(error: unknown): number | null {
  if (!(error instanceof Error)) return null;
  const { errcode, sqliteCode } = error as Error & {
    readonly errcode?: unknown;
    readonly sqliteCode?: unknown;
  };
  const code = typeof errcode === "number" ? errcode : sqliteCode;
  return typeof code === "number" ? code & 0xff : null;
}

export function isSqliteBusy(error: unknown): boolean {
  const code = sqliteCode(error);
  return code === SQLITE_BUSY || code === SQLITE_LOCKED;
}
