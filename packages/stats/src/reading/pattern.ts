/** What a Q–Q pattern amounts to. */
export const PATTERN_KINDS = [
  "none",
  "location",
  "scale",
  "location and scale",
  "upper tail",
  "lower tail",
  "both tails",
  "contamination",
  "mixture",
  "gap",
  "clipped",
  "unit change",
  "sign flip",
  "default-fill",
  "rounding",
  "vanished atom",
  "shape",
  "all missing",
  "thin",
  "cannot tell",
] as const;

export type PatternKind = (typeof PATTERN_KINDS)[number];

/** A pattern that a rule found, with the figures that it is told with. */
export interface Pattern {
  readonly kind: PatternKind;
  /** In the feature's unit, shares and factors; plain finite numbers. */
  readonly figures: Readonly<Record<string, number>>;
  /** What becomes what in a change of unit. */
  readonly name?: string;
  /** A value that many events have on both sides and that the pattern leaves out. */
  readonly apartFrom?: number;
}

/** Looks for one pattern; null where it is not there. */
export type PatternRule<Context> = (context: Context) => Pattern | null;
