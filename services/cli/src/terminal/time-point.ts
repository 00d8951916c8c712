import { parseDuration } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";

/** What words in a time stand for: the first and last stored window, and the wall clock. */
export interface TimeWords {
  readonly firstMs: number;
  readonly lastMs: number;
  readonly nowMs: number;
}

const WORD = /^(first|last|now)(?:([+-])(.+))?$/;
const ISO = /^\d{4}-\d{2}-\d{2}(?:T\d{2}:\d{2}(?::\d{2}(?:\.\d{1,9})?)?(?:Z|[+-]\d{2}:?\d{2})?)?$/;

/**
 * A time on the command line: ISO 8601 (without a zone: UTC), or `first`, `last`, `now` with a length of time added or taken off.
 *
 * @throws MOORLINE_INPUT_OPTION when it is none of these
 */
export function parseTimePoint(command: string, option: string, text: string, words: TimeWords): number {
  const word = WORD.exec(text);
  if (word !== null) {
    const base = { first: words.firstMs, last: words.lastMs, now: words.nowMs }[
      word[1] as "first" | "last" | "now"
    ];
    if (word[2] === undefined) return base;
    const ms = parseDuration(word[3]);
    if (ms !== null) return word[2] === "+" ? base + ms : base - ms;
  }
  if (ISO.test(text)) {
    const hasZone = /(Z|[+-]\d{2}:?\d{2})$/.test(text) && text.includes("T");
    const ms = Date.parse(text.includes("T") && !hasZone ? `${text}Z` : text);
    if (!Number.isNaN(ms)) return ms;
  }
  throw new MoorlineError("MOORLINE_INPUT_OPTION", {
    command,
    option,
    value: JSON.stringify(text),
    wanted: "a time such as 2026-05-01T12:00Z, last, last-1h, first or now",
  });
}

/**
 * `FROM..TO` on the command line.
 *
 * @throws MOORLINE_INPUT_OPTION when it is no range, or an empty one
 */
export function parseTimeRange(
  command: string,
  option: string,
  text: string,
  words: TimeWords,
): { readonly fromMs: number; readonly toMs: number } {
  const parts = text.split("..");
  if (parts.length === 2) {
    const fromMs = parseTimePoint(command, option, parts[0]!, words);
    const toMs = parseTimePoint(command, option, parts[1]!, words);
    if (fromMs < toMs) return { fromMs, toMs };
  }
  throw new MoorlineError("MOORLINE_INPUT_OPTION", {
    command,
    option,
    value: JSON.stringify(text),
    wanted: "a range FROM..TO whose start lies before its end",
  });
}
