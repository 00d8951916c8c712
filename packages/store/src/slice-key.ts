/** The key that a slice is of: `depot` of `depot=north`, `all` of `all`. */
export function sliceKey(slice: string): string {
  const end = slice.indexOf("=");
  return end === -1 ? slice : slice.slice(0, end);
}
