const MOST_CHARACTERS = 40;

/**
 * A category's name in a sentence: in quotation marks, control characters visible, the middle of nowhere cut off.
 *
 * Edges   never longer than 40 characters and what says so; a name of spaces or none stays visible by its quotation marks.
 *
 * @example categoryInWords("north") // => "\"north\""
 */
export function categoryInWords(category: string): string {
  // Cut by code points, not within one; no name is walked through further than it is shown.
  const shown = [...category.slice(0, 2 * MOST_CHARACTERS + 2)].slice(0, MOST_CHARACTERS).join("");
  const rest = category.length > shown.length ? "…" : "";
  return `"${shown.replace(HIDDEN, visible)}${rest}"`;
}

/** Control and format characters (those that turn the direction of text are among them), line separators, halves of pairs. */
const HIDDEN = /[\p{Cc}\p{Cf}\p{Zl}\p{Zp}\p{Cs}"\\]/gu;

function visible(character: string): string {
  if (character === '"' || character === "\\") return `\\${character}`;
  return `\\u{${character.codePointAt(0)!.toString(16)}}`;
}
