const DAYS_IN_MONTH = [31, 29, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];
const LOWER_T = 0x74;
const UPPER_T = 0x54;
const SPACE = 0x20;

/**
 * Epoch milliseconds of an ISO 8601 date-time, rounded down; null for anything else. Never throws.
 *
 * Takes `YYYY-MM-DD`, or that with `T`, `t` or a space and `hh:mm[:ss[.fraction]]`, and then nothing, `Z` or an offset
 * (`+hh:mm`, `+hhmm`, `+hh`). Without an offset the time is UTC: the result must not hang on the time zone of the machine,
 * which is why `Date.parse` (local time there, and lenient about much else) is not used.
 */
export function parseIsoTime(text: string): number | null {
  if (text.length < 10 || text.length > 40) return null;
  const dayMs = parseDay(text);
  if (dayMs === null || text.length === 10) return dayMs;

  const mark = text.charCodeAt(10);
  if (mark !== UPPER_T && mark !== SPACE && mark !== LOWER_T) return null;
  const hour = digits(text, 11, 2);
  const minute = digits(text, 14, 2);
  if (hour < 0 || hour > 23 || minute < 0 || minute > 59 || text[13] !== ":") return null;

  let at = 16;
  let second = 0;
  let fractionMs = 0;
  if (text[at] === ":") {
    second = digits(text, 17, 2);
    if (second < 0 || second > 59) return null;
    at = 19;
    if (text[at] === "." || text[at] === ",") {
      const end = endOfDigits(text, at + 1);
      if (end === at + 1) return null;
      fractionMs = Number(text.slice(at + 1, Math.min(end, at + 4)).padEnd(3, "0"));
      at = end;
    }
  }
  const offsetMs = parseOffset(text, at);
  return offsetMs === null
    ? null
    : dayMs + hour * 3_600_000 + minute * 60_000 + second * 1000 + fractionMs - offsetMs;
}

function parseDay(text: string): number | null {
  const year = digits(text, 0, 4);
  const month = digits(text, 5, 2);
  const day = digits(text, 8, 2);
  if (year < 0 || month < 1 || month > 12 || day < 1 || text[4] !== "-" || text[7] !== "-") return null;

  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  if (day > DAYS_IN_MONTH[month - 1]! || (month === 2 && day === 29 && !leap)) return null;
  // Date.UTC takes years 0 to 99 as 1900 to 1999.
  return year < 100 ? null : Date.UTC(year, month - 1, day);
}

/** Milliseconds east of UTC of what stands from `at` to the end; null when it is no offset. */
function parseOffset(text: string, at: number): number | null {
  if (at === text.length) return 0;
  const sign = text[at];
  if (sign === "Z" || sign === "z") return at + 1 === text.length ? 0 : null;
  if (sign !== "+" && sign !== "-") return null;

  const hours = digits(text, at + 1, 2);
  const colon = text[at + 3] === ":" ? 1 : 0;
  const minutes = at + 3 === text.length ? 0 : digits(text, at + 3 + colon, 2);
  const end = at + 3 === text.length ? at + 3 : at + 5 + colon;
  if (hours < 0 || hours > 23 || minutes < 0 || minutes > 59 || end !== text.length) return null;
  return (sign === "-" ? -1 : 1) * (hours * 3_600_000 + minutes * 60_000);
}

/** The whole number of exactly `count` digits at `at`, or -1. */
function digits(text: string, at: number, count: number): number {
  let value = 0;
  for (let i = at; i < at + count; i++) {
    const digit = text.charCodeAt(i) - 48;
    if (!(digit >= 0 && digit <= 9)) return -1;
    value = value * 10 + digit;
  }
  return value;
}

function endOfDigits(text: string, from: number): number {
  let at = from;
  while (text.charCodeAt(at) >= 48 && text.charCodeAt(at) <= 57) at++;
  return at;
}
