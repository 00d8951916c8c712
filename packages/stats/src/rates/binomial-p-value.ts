import { MoorlineError } from "@moorline/errors";
import { incompleteBeta } from "../incomplete-beta.js";
import { logFactorial } from "../log-gamma.js";
import { requireCounts } from "./wilson.js";

export type Alternative = "two-sided" | "greater" | "less";

/** Counts that are as likely as the observed one up to this relative difference are as far out: R's own allowance. */
const AS_LIKELY = 1 + 1e-7;

/**
 * Exact binomial p-value of a count against an expected share.
 *
 * Definition  greater: P(K ≥ k); less: P(K ≤ k); two-sided: the sum over all counts that are no likelier than k.
 * Shape       whole 0 ≤ k ≤ n, n > 0; share in [0, 1].
 * Accuracy    relative 1e-10 (that of `incompleteBeta`).
 * Edges       share 0 or 1 → 1 when the count is what it must be, else 0.
 * Cost        O(√n + log n).
 * Source      Clopper & Pearson 1934; two-sided by the convention of R's binom.test.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when count, trials or share are outside their domains
 * @example binomialPValue(10, 10, 0.5, "greater") // => 0.0009765625
 */
export function binomialPValue(
  events: number,
  trials: number,
  share: number,
  alternative: Alternative = "two-sided",
): number {
  requireCounts(events, trials);
  if (!(share >= 0 && share <= 1)) {
    throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
      name: "the share",
      value: share,
      domain: "0 to 1",
    });
  }
  if (share === 0 || share === 1) return certain(events, trials * share, alternative);
  if (alternative === "greater") return atLeast(events, trials, share);
  if (alternative === "less") return atMost(events, trials, share);
  if (events === trials * share) return 1;
  const limit = logProbability(events, trials, share) + Math.log(AS_LIKELY);
  const below = events < trials * share;
  // The counts on the other side of the mean that are no likelier: from the first one outward they all are.
  const mirror = below
    ? firstWhere(Math.ceil(trials * share), trials, (k) => logProbability(k, trials, share) <= limit)
    : firstWhere(-Math.floor(trials * share), 0, (k) => logProbability(-k, trials, share) <= limit);
  const other = below ? atLeast(mirror, trials, share) : atMost(-mirror, trials, share);
  return Math.min(1, (below ? atMost(events, trials, share) : atLeast(events, trials, share)) + other);
}

function certain(events: number, must: number, alternative: Alternative): number {
  if (alternative === "greater") return events <= must ? 1 : 0;
  if (alternative === "less") return events >= must ? 1 : 0;
  return events === must ? 1 : 0;
}

function atLeast(events: number, trials: number, share: number): number {
  if (events > trials) return 0;
  return events <= 0 ? 1 : incompleteBeta(share, events, trials - events + 1);
}

function atMost(events: number, trials: number, share: number): number {
  if (events < 0) return 0;
  return events >= trials ? 1 : incompleteBeta(1 - share, trials - events, events + 1);
}

function logProbability(k: number, n: number, p: number): number {
  return logFactorial(n) - logFactorial(k) - logFactorial(n - k) + k * Math.log(p) + (n - k) * Math.log1p(-p);
}

/** The first whole number from `from` to `to` for which a condition holds that then goes on holding; `to` + 1 when none. */
function firstWhere(from: number, to: number, holds: (k: number) => boolean): number {
  let low = from;
  let high = to + 1;
  while (low < high) {
    const middle = Math.floor((low + high) / 2);
    if (holds(middle)) high = middle;
    else low = middle + 1;
  }
  return low;
}
