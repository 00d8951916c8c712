import type { CdfView } from "../cdf-view.js";
import { eventsAt } from "../events-at.js";
import type { Pattern } from "./pattern.js";
import { heaviestAtoms, shareAt } from "./view-shape.js";

const LEAST_SHARE = 0.01;
const STANDARD_ERRORS = 4;
const LOOKED_AT = 8;

/** A value that production repeats and the baseline does not: a limit where values pile up, else a filled-in default. */
export function newAtomRule(baseline: CdfView, production: CdfView, m: number): Pattern | null {
  for (const { value, share } of heaviestAtoms(production, LOOKED_AT)) {
    const before = shareAt(baseline, value);
    if (!isMore(share, before, m, baseline.n)) continue;
    const clipped = clippedAt(baseline, production, value, share, m);
    if (clipped !== null) return clipped;
    return { kind: "default-fill", figures: { value, share, before } };
  }
  return null;
}

/** A value that the baseline repeats and production does not, or much less. */
export function vanishedAtomRule(baseline: CdfView, production: CdfView, m: number): Pattern | null {
  for (const { value, share: before } of heaviestAtoms(baseline, LOOKED_AT)) {
    const share = shareAt(production, value);
    if (share > before / 2 || !isMore(before, share, m, baseline.n)) continue;
    return { kind: "vanished atom", figures: { value, share, before } };
  }
  return null;
}

function isMore(share: number, other: number, m: number, n: number): boolean {
  const pooled = (share * m + other * n) / (m + n);
  const error = Math.sqrt(pooled * (1 - pooled) * (1 / m + 1 / n));
  return share - other >= Math.max(LEAST_SHARE, STANDARD_ERRORS * error);
}

/** The end of production's range holds what the baseline has beyond it. */
function clippedAt(
  baseline: CdfView,
  production: CdfView,
  value: number,
  share: number,
  m: number,
): Pattern | null {
  const { below, upTo } = eventsAt(baseline, value);
  const isUpper = value === production.values.at(-1);
  const isLower = value === production.values[0];
  if (isUpper === isLower) return null;
  const beyond = isUpper ? 1 - upTo / baseline.n : below / baseline.n;
  const slack = 0.35 * share + 4 * Math.sqrt(share / m) + 0.004;
  if (beyond <= 0 || Math.abs(beyond - share) > slack) return null;
  return { kind: "clipped", figures: { value, share, beyond, upper: isUpper ? 1 : 0 } };
}
