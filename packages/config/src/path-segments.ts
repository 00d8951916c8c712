/** Deepest place in a payload that a path may name. */
export const MAX_PATH_SEGMENTS = 16;

const SEGMENT = /"((?:[^"\\]|\\["\\])*)"|([^."]+)/y;

/**
 * A path into the payload as segments; null when it cannot be read. A name that holds a dot is put in double quotes, or the path is
 * given as a list of names.
 *
 * @example parsePath("cargo.temp") // => ["cargo", "temp"]
 * @example parsePath('"cargo.temp".mean') // => ["cargo.temp", "mean"]
 */
export function parsePath(path: unknown): readonly string[] | null {
  if (Array.isArray(path)) return isSegmentList(path) ? [...path] : null;
  if (typeof path !== "string" || path === "") return null;
  const segments: string[] = [];
  let at = 0;
  while (at <= path.length) {
    SEGMENT.lastIndex = at;
    const match = SEGMENT.exec(path);
    if (match === null) return null;
    segments.push(match[1] === undefined ? match[2]! : match[1].replace(/\\(["\\])/g, "$1"));
    at = SEGMENT.lastIndex;
    if (at === path.length) break;
    if (path[at] !== ".") return null;
    at++;
  }
  return isSegmentList(segments) ? segments : null;
}

function isSegmentList(list: readonly unknown[]): list is readonly string[] {
  const named = list.every((segment) => typeof segment === "string" && segment !== "");
  return named && list.length >= 1 && list.length <= MAX_PATH_SEGMENTS;
}
