/**
 * PostgreSQL keeps no NUL, SQLite reads a text up to its first NUL, and neither keeps half of a surrogate pair; names are data and
 * may hold all of these. They are written with the visible sign for NUL, U+2400, in front: `␀0`, `␀d800`, and the sign itself as `␀␀`.
 */
const SIGN = "\u2400";
const UNSTORABLE = /[\0\u2400\p{Surrogate}]/u;
const EVERY_UNSTORABLE = /[\0\u2400\p{Surrogate}]/gu;
const EVERY_WRITTEN = /\u2400(0|\u2400|d[89a-f][0-9a-f]{2})/g;

/** Any text as one that both engines keep; all but the rarest text is unchanged. */
export function toStoredText(text: string): string {
  return UNSTORABLE.test(text) ? text.replace(EVERY_UNSTORABLE, writtenForm) : text;
}

/** The text that `toStoredText` was given. */
export function fromStoredText(stored: string): string {
  return stored.includes(SIGN) ? stored.replace(EVERY_WRITTEN, (_, form: string) => readForm(form)) : stored;
}

function writtenForm(unit: string): string {
  if (unit === "\0") return `${SIGN}0`;
  return unit === SIGN ? SIGN + SIGN : SIGN + unit.charCodeAt(0).toString(16);
}

function readForm(form: string): string {
  if (form === "0") return "\0";
  return form === SIGN ? SIGN : String.fromCharCode(Number.parseInt(form, 16));
}
