const LONGEST_SLICE_TEXT = 200;

/** What an event is sliced by when the value is absent or null. */
export const NO_SLICE_VALUE = "(none)";
/** The same for an object or array, which is no single value. */
export const STRUCTURED_SLICE_VALUE = "(structured)";

/** A payload value to the text that names its slice: storable, at most 209 characters, different for different values. */
export function sliceText(value: unknown): string {
  if (typeof value === "string") {
    return value.length <= LONGEST_SLICE_TEXT && isStorable(value) ? value : storable(value);
  }
  if (value === undefined || value === null) return NO_SLICE_VALUE;
  return typeof value === "object" ? STRUCTURED_SLICE_VALUE : String(value);
}

/**
 * False for text with NUL, which PostgreSQL keeps not, or with surrogates, of which half a pair is no UTF-8: as keys they would be refused
 * or collide. Once an event: a loop over a few characters is cheaper than a regular expression.
 */
function isStorable(value: string): boolean {
  for (let i = 0; i < value.length; i++) {
    const c = value.charCodeAt(i);
    if (c === 0 || (c & 0xf800) === 0xd800) return false;
  }
  return true;
}

function storable(value: string): string {
  const wellFormed = Buffer.from(value, "utf8").toString("utf8").replaceAll("\0", "\u2400");
  if (wellFormed.length <= LONGEST_SLICE_TEXT) return wellFormed;

  // A cut must not split a pair; the hash keeps long values apart that begin alike.
  const last = wellFormed.charCodeAt(LONGEST_SLICE_TEXT - 1);
  const cut = last >= 0xd800 && last <= 0xdbff ? LONGEST_SLICE_TEXT - 1 : LONGEST_SLICE_TEXT;
  return `${wellFormed.slice(0, cut)}~${hashText(wellFormed)}`;
}

/** FNV-1a, 32 bits over UTF-16 units (Fowler, Noll and Vo), as eight hexadecimal digits. */
function hashText(text: string): string {
  let hash = 0x811c9dc5;
  for (let i = 0; i < text.length; i++) hash = Math.imul(hash ^ text.charCodeAt(i), 0x01000193);
  return (hash >>> 0).toString(16).padStart(8, "0");
}
