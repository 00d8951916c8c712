/** The start of the pane that an event time falls into. */
export function paneStart(eventMs: number, paneMs: number): number {
  return Math.floor(eventMs / paneMs) * paneMs;
}

/** The disjoint window of a horizon that contains an instant: horizons lie on multiples of their length since 1970 (UTC). */
export function windowAround(
  instantMs: number,
  horizonMs: number,
): { readonly startMs: number; readonly endMs: number } {
  const startMs = Math.floor(instantMs / horizonMs) * horizonMs;
  return { startMs, endMs: startMs + horizonMs };
}

/** A range widened to whole panes. */
export function wholePanes(
  fromMs: number,
  toMs: number,
  paneMs: number,
): { readonly fromMs: number; readonly toMs: number } {
  return { fromMs: paneStart(fromMs, paneMs), toMs: Math.ceil(toMs / paneMs) * paneMs };
}
