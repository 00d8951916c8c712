/**
 * Rows in the order of their keys: numbers by size, texts by UTF-16 code units. Sorted here and not by the database, because
 * PostgreSQL sorts texts by the language it was set up for, and merges must see one order everywhere.
 */
export function inOrder<T>(rows: readonly T[], keyOf: (row: T) => readonly (string | number)[]): T[] {
  const keyed = rows.map((row) => ({ row, key: keyOf(row) }));
  return keyed.sort((a, b) => compareKeys(a.key, b.key)).map(({ row }) => row);
}

function compareKeys(a: readonly (string | number)[], b: readonly (string | number)[]): number {
  for (const [index, left] of a.entries()) {
    const right = b[index]!;
    if (left !== right) return left < right ? -1 : 1;
  }
  return 0;
}
