import type { FileColumn } from "./file-columns.js";

/** What is looked for in the files. */
export interface WantedColumn {
  /** For messages and flat files: the feature's name, the slice key, the time column. */
  readonly name: string;
  readonly path: readonly string[];
}

/**
 * The column that stands for a wanted one, or null. In this order: the very path, a column called by the name, by the path with
 * dots, by the path's last part; last, a field of a column whose structure the file does not tell.
 */
export function matchColumn(columns: readonly FileColumn[], wanted: WantedColumn): FileColumn | null {
  const flat = (name: string) => columns.find(({ path }) => path.length === 1 && path[0] === name);
  return (
    columns.find(({ path }) => samePath(path, wanted.path)) ??
    flat(wanted.name) ??
    flat(wanted.path.join(".")) ??
    columns.find(({ path }) => samePath(path, wanted.name.split("."))) ??
    flat(wanted.path[wanted.path.length - 1]!) ??
    fieldOfUnknown(columns, wanted.path)
  );
}

function fieldOfUnknown(columns: readonly FileColumn[], path: readonly string[]): FileColumn | null {
  const holder = columns.find(
    (column) => column.kind === "json" && column.path.every((part, depth) => part === path[depth]),
  );
  return holder === undefined ? null : { path, kind: "json" };
}

function samePath(a: readonly string[], b: readonly string[]): boolean {
  return a.length === b.length && a.every((part, depth) => part === b[depth]);
}
