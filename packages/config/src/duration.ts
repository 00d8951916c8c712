const UNIT_MS = { ms: 1, s: 1_000, m: 60_000, h: 3_600_000, d: 86_400_000 } as const;

type DurationUnit = keyof typeof UNIT_MS;

/** What a length of time looks like in the config: a number and a unit, `90s`, `5m`, `1.5h`, `30d`, `250ms`. */
export const DURATION_PATTERN = /^(\d{1,9}(?:\.\d{1,6})?)(ms|s|m|h|d)$/;

/**
 * A length of time as the config has it, in milliseconds; null when it is none.
 *
 * @example parseDuration("5m") // => 300000
 */
export function parseDuration(text: unknown): number | null {
  if (typeof text !== "string") return null;
  const match = DURATION_PATTERN.exec(text);
  if (match === null) return null;
  return Math.round(Number(match[1]) * UNIT_MS[match[2] as DurationUnit]);
}

/**
 * Milliseconds in the largest unit that gives a whole number.
 *
 * @example formatDuration(5400000) // => "90m"
 */
export function formatDuration(ms: number): string {
  const units = Object.entries(UNIT_MS).reverse();
  const [unit, size] = units.find(([, unitMs]) => ms >= unitMs && ms % unitMs === 0) ?? ["ms", 1];
  return `${ms / size}${unit}`;
}
