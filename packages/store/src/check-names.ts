import { MoorlineError } from "@moorline/errors";
import { toStoredText } from "./stored-text.js";

/** PostgreSQL takes no index row beyond 2,704 bytes; the rest is for times and for what a row has around it. */
const MOST_KEY_BYTES = 2_500;
/** The most that a UTF-16 unit takes when stored (half of a surrogate pair, in its written form). */
const MOST_UNIT_BYTES = 7;
const SHOWN_LETTERS = 40;

/**
 * Refuses names that together are too long to be found by: the same on both engines, before anything is written.
 *
 * @throws MOORLINE_INPUT_STORE_NAME
 */
export function checkNames(names: readonly string[]): void {
  let units = 0;
  for (const name of names) units += name.length;
  if (units * MOST_UNIT_BYTES <= MOST_KEY_BYTES) return;

  const bytes = names.reduce((sum, name) => sum + Buffer.byteLength(toStoredText(name)), 0);
  if (bytes <= MOST_KEY_BYTES) return;
  const longest = names.reduce((longer, name) => (name.length > longer.length ? name : longer));
  const start = longest.slice(0, SHOWN_LETTERS);
  throw new MoorlineError("MOORLINE_INPUT_STORE_NAME", { start, bytes, most: MOST_KEY_BYTES });
}
